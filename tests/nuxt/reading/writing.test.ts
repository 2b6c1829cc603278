import { mountSuspended } from '@nuxt/test-utils/runtime'
import { expect, it } from 'vitest'
import type { ImpressionLine, ReportDraft } from '#shared/schemas/report'
import DraftFindings from '~/components/reading/DraftFindings.vue'
import ImpressionEditor from '~/components/reading/ImpressionEditor.vue'
import LimitationsEditor from '~/components/reading/LimitationsEditor.vue'
import SignChecks from '~/components/reading/SignChecks.vue'
import { assessmentOf, runWith } from '../../fixtures/report-source'

const sentence = { key: 'run/m1', runIds: ['m1'], text: 'RIGHT median motor latency 5.2 ms (limit ≤ 4.4).', fingerprint: 'new' }
const finding = { key: 'run/m1', runIds: ['m1'], text: sentence.text, edited: false, needsReview: false, left: false }

async function findings(editedFindings: ReportDraft['editedFindings']) {
  let edited = editedFindings
  const page = await mountSuspended(DraftFindings, { props: { 'findings': [finding], 'drafted': [sentence], 'modelValue': edited, 'onUpdate:modelValue': (value: ReportDraft['editedFindings']) => {
    edited = value
    void page.setProps({ modelValue: value })
  } } })
  return { page, edited: () => edited }
}
const button = (page: Awaited<ReturnType<typeof findings>>['page'], text: string) => page.findAll('button').find(each => each.text().startsWith(text))!

it('an edited sentence is kept with the fingerprint of the rows it was written for', async () => {
  const { page, edited } = await findings([])
  await button(page, 'Edit').trigger('click')
  await page.get('textarea').setValue('RIGHT median motor latency is long.')
  await button(page, 'Keep sentence').trigger('click')
  expect(edited()).toEqual([{ key: 'run/m1', text: 'RIGHT median motor latency is long.', fingerprint: 'new', left: false }])
  expect(page.text()).toContain('edited by the reader')
})

it('when its rows changed, an edited sentence is marked and the new words stand beside it', async () => {
  const { page, edited } = await findings([{ key: 'run/m1', text: 'Mine.', fingerprint: 'old', left: false }])
  expect(page.text()).toContain('needs review')
  expect(page.text()).toContain(sentence.text)
  await button(page, 'Keep mine').trigger('click')
  expect(edited()[0]).toMatchObject({ text: 'Mine.', fingerprint: 'new' })
  expect(page.text()).not.toContain('needs review')
})

it('back to the drafted words: the sentence follows its rows again', async () => {
  const { page, edited } = await findings([{ key: 'run/m1', text: 'Mine.', fingerprint: 'new', left: false }])
  await button(page, 'Back to the drafted words').trigger('click')
  expect(edited()).toEqual([])
  expect(page.text()).toContain(sentence.text)
})

it('the impression starts blank and nothing is chosen in it', async () => {
  const page = await mountSuspended(ImpressionEditor, { props: { modelValue: [], nerves: ['median'], patterns: [] } })
  expect(page.findAll('textarea').map(each => (each.element as HTMLTextAreaElement).value)).toEqual([''])
  expect(page.findAll('input[type=radio]').filter(each => (each.element as HTMLInputElement).checked)).toEqual([])
  expect((page.get('select').element as HTMLSelectElement).value).toBe('')
})

it('side and nerve are fields beside the words', async () => {
  let lines: ImpressionLine[] = []
  const page = await mountSuspended(ImpressionEditor, { props: { 'modelValue': lines, 'nerves': ['median'], 'patterns': [], 'onUpdate:modelValue': (value: ImpressionLine[]) => {
    lines = value
    void page.setProps({ modelValue: value })
  } } })
  await page.get('textarea').setValue('RIGHT median neuropathy at the wrist.')
  await page.get('input[value=right]').setValue()
  await page.get('select').setValue('nerve:median')
  await page.get('input[value=abnormal]').setValue()
  expect(lines).toMatchObject([{ words: 'RIGHT median neuropathy at the wrist.', side: 'right', nerve: 'median', pattern: null, abnormal: true }])
})

it('"none identified" and a limitation exclude each other', async () => {
  let chosen: string[] = []
  const page = await mountSuspended(LimitationsEditor, { props: { 'assessment': assessmentOf([{ ...runWith('m', 'ulnar-motor-adm', 'left', []).assessment, notDone: 'pain' }]), 'modelValue': chosen, 'onUpdate:modelValue': (value: string[]) => {
    chosen = value
    void page.setProps({ modelValue: value })
  } } })
  const tick = (text: string) => page.findAll('label').find(each => each.text().includes(text))!.get('input').setValue(true)
  expect(chosen).toEqual([])
  await tick('none identified')
  expect(chosen).toEqual(['none identified'])
  await tick('was not done')
  expect(chosen).toEqual([expect.stringMatching(/^LEFT ulnar motor.* was not done\.$/)])
  await tick('none identified')
  expect(chosen).toEqual(['none identified'])
})

it('a question before signing is answered with a reason of at least three letters', async () => {
  let resolved: ReportDraft['resolved'] = []
  const page = await mountSuspended(SignChecks, { props: { 'checks': [{ key: 'side/left', strength: 'stop', answerable: true, sentence: 'The impression names LEFT; no LEFT row is outside.' }], 'namesakes': [], 'modelValue': resolved, 'onUpdate:modelValue': (value: ReportDraft['resolved']) => {
    resolved = value
    void page.setProps({ modelValue: value })
  } } })
  await page.get('button').trigger('click')
  await page.get('form').trigger('submit')
  expect(resolved).toEqual([])
  expect(page.text()).toContain('Give the reason.')
  await page.get('input').setValue('clinical side, discussed')
  await page.get('form').trigger('submit')
  expect(resolved).toEqual([{ key: 'side/left', reason: 'clinical side, discussed' }])
  expect(page.text()).toContain('Answered: “clinical side, discussed”')
})

it('what has to be mended cannot be answered away', async () => {
  const page = await mountSuspended(SignChecks, { props: { checks: [{ key: 'impression', strength: 'stop', answerable: false, sentence: 'Write the impression.' }], namesakes: [], modelValue: [] } })
  expect(page.text()).toContain('Stops signing: Write the impression.')
  expect(page.findAll('button')).toEqual([])
})
