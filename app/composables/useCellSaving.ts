import type { SavedCell, StudyView } from '#shared/schemas/bench'
import { dropUnsent, emptyQueue, enqueue, resolveConflict, settle, takeBatch, takeFresh, unsavedCells, type SaveQueue } from '~/utils/save-queue'
import { newId } from '~/utils/new-id'
import type { CellContent } from '~/utils/study-edits'

/** saved: nothing is outstanding. saving: on its way. waiting: not saved yet, tried again by itself. stopped: saving will not succeed by trying again. */
export type SavingState = 'saved' | 'saving' | 'waiting' | 'stopped'

interface CellSavingHandlers {
  /** the other person's value was chosen */
  onTheirs: (rowId: string, field: string, entry: CellContent) => void
  /** cells that a closed tab left are back: they stand on the page again */
  onRestored: (cells: { rowId: string, field: string, entry: CellContent }[]) => void
}

const together = 120
const retryAfter = [1_000, 2_000, 5_000, 10_000, 20_000]

/**
 * Saves cells one batch at a time, each against the revision it was seen with; keeps everything until the server has
 * acknowledged it, repeats a broken batch under the same ids, and puts a cell that someone else changed up for a choice.
 *
 * @example
 * const saving = useCellSaving(view, { onTheirs: show, onRestored: cells => … })
 * saving.save([{ rowId, field: 'latencyMs', entry: 4.2 }])
 */
export function useCellSaving({ id: studyId, number, cellRevisions }: Pick<StudyView, 'id' | 'number' | 'cellRevisions'>, { onTheirs, onRestored }: CellSavingHandlers) {
  const queue = shallowRef<SaveQueue>(emptyQueue(cellRevisions))
  const state = ref<SavingState>('saved')
  const savedAt = ref('')
  const complaint = ref('')
  const signedOut = useSignedOut()
  const person = usePersonMark()
  let timer: ReturnType<typeof setTimeout> | undefined
  let failures = 0
  let underWay: Promise<void> | undefined

  const outstanding = computed(() => unsavedCells(queue.value).length - Object.keys(queue.value.conflicts).length)
  const conflicts = computed(() => Object.entries(queue.value.conflicts).map(([key, conflict]) => ({ key, ...conflict })))

  const kept = useKeptQueue(studyId, number, queue, (left) => {
    onRestored(unsavedCells(left))
    if (outstanding.value > 0) state.value = 'saving'
    later(0)
  })

  function later(milliseconds: number) {
    clearTimeout(timer)
    timer = setTimeout(() => void send(), milliseconds)
  }

  function save(cells: { rowId: string, field: string, entry: CellContent }[]) {
    queue.value = cells.reduce((q, cell) => enqueue(q, cell.rowId, cell.field, cell.entry), queue.value)
    if (state.value === 'saved') state.value = 'saving'
    if (state.value !== 'waiting') later(together)
  }

  /** A repeat does not count as work at the desk: it carries a mark, and the idle time-out goes on. */
  async function put() {
    const cells = queue.value.inFlight
    return $fetch<{ cells: SavedCell[] }>(`/api/studies/${studyId}/cells`, {
      method: 'PUT', body: { cells }, retry: 0, timeout: 20_000, headers: { ...person(), ...failures > 0 ? { 'x-background': '1' } : {} },
    })
  }

  function onAnswer(answers: SavedCell[]) {
    queue.value = settle(queue.value, answers)
    failures = 0
    complaint.value = ''
    const last = answers.filter(answer => answer.saved).at(-1)
    if (last) savedAt.value = last.savedAt
    state.value = outstanding.value > 0 ? 'saving' : 'saved'
    if (outstanding.value > 0) later(0)
  }

  function onFailure(error: unknown) {
    const { code, status, message } = toApiError(error)
    if (code === 'not-signed-in') signedOut.value = true
    complaint.value = status === 0 ? 'The server cannot be reached.' : message
    const hopeless = status >= 400 && status < 500 && !['not-signed-in', 'too-many-requests'].includes(code)
    state.value = hopeless ? 'stopped' : 'waiting'
    if (!hopeless) later(retryAfter[Math.min(failures, retryAfter.length - 1)]!)
    failures += 1
  }

  async function sendOnce() {
    await kept.before()
    queue.value = takeBatch(queue.value, newId)
    if (queue.value.inFlight.length === 0) return
    await kept.before()
    await put().then(answer => onAnswer(answer.cells), onFailure)
  }

  function send(): Promise<void> {
    clearTimeout(timer)
    underWay ??= sendOnce().finally(() => underWay = undefined)
    return underWay
  }

  /** Sends what is outstanding now. True when the server has acknowledged everything and no choice is open. */
  async function flush(): Promise<boolean> {
    for (let round = 0; round < 5 && outstanding.value > 0; round += 1) {
      await send()
      if (state.value === 'waiting' || state.value === 'stopped') break
    }
    return outstanding.value === 0 && conflicts.value.length === 0
  }

  function resolve(key: string, choice: 'mine' | 'theirs') {
    const conflict = queue.value.conflicts[key]
    queue.value = resolveConflict(queue.value, key, choice)
    if (choice === 'theirs' && conflict) onTheirs(conflict.rowId, conflict.field, conflict.theirs.entry)
    else later(0)
  }

  /** A fresh copy of the study brings fresh revisions. `editing`: the cell that is being typed into. */
  function takeRevisions(fresh: Record<string, number>, editing?: string) {
    queue.value = takeFresh(queue.value, fresh, editing)
  }

  function warn(event: BeforeUnloadEvent) {
    if ((outstanding.value > 0 || conflicts.value.length > 0) && !kept.isKept.value) event.preventDefault()
  }
  /** Where nothing is kept on the device the page is not left with unsent cells. */
  onBeforeRouteLeave(async () => {
    if (unsent.value.length === 0 || kept.isKept.value || await flush()) return true
    complaint.value = 'Nothing is kept on this device: stay on this page until these values are stored.'
    return false
  })
  onMounted(() => {
    window.addEventListener('beforeunload', warn)
    window.addEventListener('online', retry)
  })
  onBeforeUnmount(() => {
    window.removeEventListener('beforeunload', warn)
    window.removeEventListener('online', retry)
    void flush().finally(kept.leave).finally(() => unsentHere.value = kept.isKept.value ? 0 : unsent.value.length)
  })

  /** What the server will not take is given up, on purpose. */
  function discard() {
    clearTimeout(timer)
    queue.value = dropUnsent(queue.value)
    complaint.value = ''
    state.value = 'saved'
  }
  const unsent = computed(() => unsavedCells(queue.value))
  /** For the question at sign-out: what is typed here and not on the server. */
  const unsentHere = useUnsentHere()
  watch(unsent, cells => unsentHere.value = cells.length, { flush: 'sync' })
  useBeforeIdle(flush)

  function retry() {
    if (outstanding.value > 0) void send()
  }

  return { queue, state, savedAt, complaint, outstanding, conflicts, unsent, isKept: kept.isKept, save, flush, retry, discard, resolve, takeRevisions }
}

/** How many cells typed on this page the server has not acknowledged. */
export function useUnsentHere() {
  return useState('unsent-here', () => 0)
}
