import { mountSuspended, registerEndpoint } from '@nuxt/test-utils/runtime'
import { flushPromises } from '@vue/test-utils'
import { createError, readBody } from 'h3'
import { afterEach, beforeEach, expect, it, vi } from 'vitest'
import { defineComponent, h } from 'vue'
import { reportDraftSchema, type ReadingView, type ReportDraft } from '#shared/schemas/report'
import { useReadingDraft } from '~/composables/useReadingDraft'

const viewOf = (draft: Partial<ReportDraft> = {}, draftRevision = 3): ReadingView => ({
  reportId: 'r', number: null, draft: { ...reportDraftSchema.parse({}), ...draft }, draftRevision, findings: [], checks: [], fingerprint: 'f', readyToSign: false, phrases: [], promptContact: { list: [], found: [] }, versions: [], namesakes: [],
})
const saves: { draft: ReportDraft, revision: number }[] = []
let answer: (body: { draft: ReportDraft, revision: number }) => unknown

registerEndpoint('/api/studies/s1/draft', { method: 'PUT', handler: async (event) => {
  const body = await readBody<{ draft: ReportDraft, revision: number }>(event)
  saves.push(body)
  return answer(body)
} })
registerEndpoint('/api/studies/s1/reading', () => viewOf({ correlation: 'theirs' }, 9))

beforeEach(() => {
  saves.length = 0
  answer = body => ({ revision: body.revision + 1, savedAt: '2026-12-02T14:02:07Z', view: viewOf(body.draft, body.revision + 1) })
})
afterEach(() => vi.useRealTimers())

async function draftOfPage() {
  let made: ReturnType<typeof useReadingDraft> | undefined
  const page = await mountSuspended(defineComponent({ setup() {
    made = useReadingDraft('s1', viewOf())
    return () => h('div')
  } }))
  return { ...made!, page }
}

it('what was typed is sent with the revision last seen, and the next save with the new one', async () => {
  const { draft, saving, savedAt, flush } = await draftOfPage()
  draft.value.correlation = 'Fits the history.'
  await flush()
  expect([saving.value, savedAt.value]).toEqual(['saved', '2026-12-02T14:02:07Z'])
  draft.value.correlation = 'Fits the history well.'
  await flush()
  expect(saves.map(save => [save.revision, save.draft.correlation])).toEqual([[3, 'Fits the history.'], [4, 'Fits the history well.']])
})

it('nothing is sent when nothing changed', async () => {
  const { flush } = await draftOfPage()
  expect(await flush()).toBe(true)
  expect(saves).toEqual([])
})

it('it saves itself a moment after the last change', async () => {
  const { draft, saving } = await draftOfPage()
  draft.value.recommendation = 'Splint.'
  await vi.waitFor(() => expect(saves).toHaveLength(1), { timeout: 3000 })
  await vi.waitFor(() => expect(saving.value).toBe('saved'))
})

it('someone else saved: both are kept, and "keep mine" saves over theirs', async () => {
  const { draft, saving, theirs, flush, settle } = await draftOfPage()
  answer = () => {
    throw createError({ statusCode: 409, data: { code: 'changed-meanwhile', message: 'Someone changed this.' } })
  }
  draft.value.correlation = 'mine'
  expect(await flush()).toBe(false)
  expect([saving.value, theirs.value?.draft.correlation, draft.value.correlation]).toEqual(['conflict', 'theirs', 'mine'])
  answer = body => ({ revision: body.revision + 1, savedAt: '2026-12-02T14:03:00Z', view: viewOf(body.draft) })
  await settle('mine')
  expect(saves.at(-1)).toMatchObject({ revision: 9, draft: { correlation: 'mine' } })
  expect(saving.value).toBe('saved')
})

it('"take theirs" shows theirs and sends nothing', async () => {
  const { draft, saving, flush, settle } = await draftOfPage()
  answer = () => {
    throw createError({ statusCode: 409, data: { code: 'changed-meanwhile', message: 'Someone changed this.' } })
  }
  draft.value.correlation = 'mine'
  await flush()
  await settle('theirs')
  await flushPromises()
  expect([draft.value.correlation, saving.value, saves.length]).toEqual(['theirs', 'saved', 1])
})

it('a server out of reach loses nothing: the text stays and is said to be unsaved', async () => {
  const { draft, saving, flush } = await draftOfPage()
  answer = () => {
    throw createError({ statusCode: 503 })
  }
  draft.value.correlation = 'kept'
  expect(await flush()).toBe(false)
  expect([saving.value, draft.value.correlation]).toEqual(['offline', 'kept'])
})
