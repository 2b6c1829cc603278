import type { ReadingView, ReportDraft } from '#shared/schemas/report'
import { cleanDraft } from '~/utils/reading/clean-draft'

/** saved: as on the server. waiting: typed, not sent yet. offline: tried and not reached. conflict: someone else saved. */
export type DraftSaving = 'saved' | 'waiting' | 'saving' | 'offline' | 'refused' | 'conflict'

interface SaveAnswer { revision: number, savedAt: string, view: ReadingView }

const PAUSE_MS = 700
const RETRY_MS = 5_000

/**
 * The reader's draft: saves itself a moment after the last change, one request at a time, keeps what was typed when
 * the server cannot be reached and tries again, and asks when someone else saved meanwhile.
 *
 * `view` is the server's last word (sentences, check list, fingerprint); `draft` is what stands on the page.
 *
 * @example
 * const { draft, view, saving, savedAt, flush } = useReadingDraft(studyId, firstView)
 */
export function useReadingDraft(studyId: string, first: ReadingView) {
  const api = useApi()
  const draft = ref<ReportDraft>(structuredCopy(first.draft))
  const view = ref<ReadingView>(first)
  const saving = ref<DraftSaving>('saved')
  const savedAt = ref('')
  const complaint = ref('')
  const theirs = ref<ReadingView | null>(null)
  let revision = first.draftRevision
  let lastSent = JSON.stringify(cleanDraft(draft.value))
  let timer: ReturnType<typeof setTimeout> | undefined
  let underWay: Promise<void> | undefined

  const isDirty = () => JSON.stringify(cleanDraft(draft.value)) !== lastSent

  function later(milliseconds: number) {
    clearTimeout(timer)
    timer = setTimeout(flush, milliseconds)
  }

  async function send(body: ReportDraft) {
    saving.value = 'saving'
    try {
      const answer = await api<SaveAnswer>(`/api/studies/${studyId}/draft`, { method: 'PUT', body: { draft: body, revision } })
      revision = answer.revision
      lastSent = JSON.stringify(body)
      view.value = answer.view
      savedAt.value = answer.savedAt
      saving.value = isDirty() ? 'waiting' : 'saved'
      complaint.value = ''
    }
    catch (error) {
      await onRefused(toApiError(error))
    }
  }

  async function onRefused(error: ReturnType<typeof toApiError>) {
    complaint.value = error.body.fields?.[0]?.message ?? error.message
    if (error.code === 'changed-meanwhile') {
      theirs.value = await api<ReadingView>(`/api/studies/${studyId}/reading`).catch(() => null)
      saving.value = 'conflict'
    }
    else if (error.status === 0 || error.status >= 500 || error.code === 'not-signed-in') {
      saving.value = 'offline'
      later(RETRY_MS)
    }
    else {
      saving.value = 'refused'
    }
  }

  /** Sends what is unsaved now; afterwards the view fits the draft. True when everything is on the server. */
  async function flush(): Promise<boolean> {
    clearTimeout(timer)
    await underWay
    if (saving.value === 'conflict') return false
    if (isDirty()) {
      underWay = send(cleanDraft(structuredCopy(draft.value))).finally(() => underWay = undefined)
      await underWay
    }
    else {
      saving.value = 'saved'
    }
    return saving.value === 'saved'
  }

  /** After a conflict: keep mine (and overwrite) or take theirs. */
  function settle(choice: 'mine' | 'theirs') {
    if (!theirs.value) return
    revision = theirs.value.draftRevision
    if (choice === 'theirs') {
      draft.value = structuredCopy(theirs.value.draft)
      view.value = theirs.value
      lastSent = JSON.stringify(cleanDraft(draft.value))
    }
    theirs.value = null
    saving.value = 'waiting'
    return flush()
  }

  /** Reads the server's view again (the study changed), without touching what is typed. */
  async function reread() {
    if (!await flush()) return
    view.value = await api<ReadingView>(`/api/studies/${studyId}/reading`)
    revision = view.value.draftRevision
  }

  watch(draft, () => {
    if (saving.value === 'conflict' || !isDirty()) return
    if (saving.value !== 'saving') saving.value = 'waiting'
    later(PAUSE_MS)
  }, { deep: true })
  onBeforeUnmount(() => void flush())

  return { draft, view, saving, savedAt, complaint, theirs, flush, settle, reread, revision: () => revision }
}

function structuredCopy<T>(value: T): T {
  return JSON.parse(JSON.stringify(value)) as T
}
