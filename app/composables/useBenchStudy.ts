import type { InjectionKey } from 'vue'
import type { Remark } from '#shared/calculations/types'
import { withoutFallenAnswers } from '#shared/calculations/plausibility/kept-answer'
import { quantityOf, type QuantityId } from '#shared/catalogue/quantities'
import type { ChangeNotice } from '#shared/change-notice'
import type { ApiErrorBody } from '#shared/errors'
import type { StudyView } from '#shared/schemas/bench'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { entryText } from '~/utils/grid-entry'
import { emptyHistory, redo as redoStep, remember, undo as undoStep, type CellEdit } from '~/utils/grid-history'
import { cellKey, type CellAddress } from '~/utils/grid-moves'
import { syncMap } from '~/utils/keep-same'
import { makeTurns } from '~/utils/turns'
import { unsavedCells, type SaveQueue } from '~/utils/save-queue'
import { cellContent, findRow, sameContent, withCell, type CellContent } from '~/utils/study-edits'

/** Cells that were acknowledged after this copy was made: a slow answer must not bring an older value back. */
function acknowledgedSince(fresh: StudyView, queue: SaveQueue, current: Study) {
  return Object.entries(queue.revisions).filter(([key, revision]) => revision > (fresh.cellRevisions[key] ?? 0)).flatMap(([key]) => {
    const [rowId = '', field = ''] = key.split('/')
    const found = findRow(current, rowId)
    return found ? [{ rowId, field, entry: cellContent(found.row, field) }] : []
  })
}

/** The server's study with everything on top that it has not acknowledged, or acknowledged meanwhile. */
function withUnsaved(fresh: StudyView, queue: SaveQueue, current: Study) {
  return [...acknowledgedSince(fresh, queue, current), ...unsavedCells(queue)].reduce((study, cell) => withCell(study, cell.rowId, cell.field, cell.entry), fresh.study)
}

/** The cell a question stands at: a velocity is questioned at the distance, a series at its line; '' when it is about the run. */
export function cellOfRemark({ rowId, quantity, code }: Pick<Remark, 'rowId' | 'quantity' | 'code'>): string {
  if (!rowId) return ''
  if (code.startsWith('series') || code.startsWith('train-keeps')) return cellKey({ rowId, field: 'series' })
  return quantity ? cellKey({ rowId, field: quantity === 'velocityMps' ? 'distanceMm' : quantity }) : ''
}

function openByCell(remarks: readonly Remark[]): Map<string, 'stop' | 'check'> {
  const found = new Map<string, 'stop' | 'check'>()
  for (const remark of remarks) {
    const key = cellOfRemark(remark)
    if (key && !remark.kept && remark.strength !== 'note' && found.get(key) !== 'stop') found.set(key, remark.strength)
  }
  return found
}

/** What the explanation at the side is about: a row of a run, or one result. */
export interface Explained { title: string, runId: string | null, rowId?: string, key?: string }

/** The cell that is being typed into: it answers before the cursor leaves. */
export interface CellEditor { address: CellAddress, isDirty: () => boolean, /** false when what stands there cannot be stored */ commit: () => boolean, reset: () => void }

/**
 * One study at the bench: what stands on the page, saving, undo, live results, and the acts that change more than a cell.
 *
 * @example
 * const bench = useBenchStudy(view)
 * bench.change([{ rowId, field: 'latencyMs', before: 4.2, after: 5.2 }])
 */
export function useBenchStudy(first: StudyView) {
  const api = useApi()
  const view = shallowRef(first)
  const study = shallowRef(first.study)
  const turns = makeTurns()
  onBeforeUnmount(turns.stop)
  /** The study as the sheets show it. What is typed stands in its own cell at once, around it after the next frame. */
  const drawn = shallowRef(first.study)
  const draw = () => drawn.value = study.value
  /** Counts what was drawn at once: each cell then shows what the study holds, also where a key was taken back before it was drawn. */
  const redrawn = shallowRef(0)
  function drawAtOnce() {
    draw()
    redrawn.value++
  }
  /** At once: a cell that showed an older value beside its new revision would overwrite what somebody else stored, unseen. */
  function show(next: Study) {
    study.value = next
    drawAtOnce()
  }
  function showTyped(next: Study) {
    study.value = next
    turns.soon(draw, draw)
  }
  const history = shallowRef(emptyHistory())
  const problem = ref<ApiErrorBody | null>(null)
  /** Which act the problem belongs to, so that it is said once, where the act was. */
  const problemOf = ref('')
  const busy = ref(false)
  const saving = useCellSaving(first, {
    onTheirs: (rowId, field, entry) => show(withCell(study.value, rowId, field, entry)),
    onRestored: cells => show(cells.reduce((state, cell) => withCell(state, cell.rowId, cell.field, cell.entry), study.value)),
  })
  const policy = computed(() => view.value.policy)
  const live = useLiveAssessment(study, policy, () => view.value.assessment, turns)
  const path = (rest: string) => `/api/studies/${first.id}/${rest}`

  const mayType = computed(() => view.value.mayRecord && (view.value.state === 'recording' || view.value.state === 'returned'))
  const at = shallowRef<CellAddress | null>(null)
  const runInHand = computed(() => at.value?.runId)
  const editor = shallowRef<CellEditor | null>(null)
  const explained = shallowRef<Explained | null>(null)
  const allColumns = ref(false)
  /** The run whose notes and steps are open. */
  const notesOf = ref<string | null>(null)
  /** Cells whose text cannot be stored: it stands there with its sentence, and the study is not handed over with it. */
  const unaccepted = reactive(new Map<string, { runId: string, sentence: string }>())

  /** Shows a value while it is typed, without storing it. */
  function preview(rowId: string, field: string, content: CellContent) {
    showTyped(withCell(study.value, rowId, field, content))
  }

  function apply(edits: CellEdit[]) {
    showTyped(withoutFallenAnswers(edits.reduce((state, edit) => withCell(state, edit.rowId, edit.field, edit.after), study.value)))
    saving.save(edits.map(edit => ({ rowId: edit.rowId, field: edit.field, entry: edit.after })))
  }

  /** A cell that was typed into: it shows its own text, so that the sheet around it may follow. */
  function store(edits: CellEdit[]) {
    const real = edits.filter(edit => !sameContent(edit.before, edit.after))
    if (real.length === 0) return
    history.value = remember(history.value, real)
    apply(real)
  }
  /** Any other change stands on the page at once. */
  function change(edits: CellEdit[]) {
    store(edits)
    drawAtOnce()
  }

  /** Undo and redo answer with the cell they changed, for the cursor to go there. */
  function walk(step: ReturnType<typeof undoStep>): CellAddress | null {
    if (!step) return null
    history.value = step.history
    const edits = step.edits.filter(edit => findRow(study.value, edit.rowId))
    apply(edits)
    drawAtOnce()
    const lastEdit = edits.at(-1)
    const row = lastEdit && findRow(study.value, lastEdit.rowId)
    return lastEdit && row ? { runId: row.run.id, rowId: lastEdit.rowId, field: lastEdit.field } : null
  }

  function take(fresh: StudyView) {
    view.value = fresh
    show(withUnsaved(fresh, saving.queue.value, study.value))
    const typing = editor.value?.isDirty() ? cellKey(editor.value.address) : undefined
    saving.takeRevisions(fresh.cellRevisions, typing)
    if (saving.outstanding.value === 0) live.compareWith(fresh.study, fresh.assessment)
  }

  useKeptStudy(() => [view.value, saving.savedAt.value], () => editor.value?.isDirty() ? null : { ...view.value, study: withUnsaved(view.value, saving.queue.value, study.value), cellRevisions: saving.queue.value.revisions })

  /** @param background true when the program itself looks, because somebody else changed something */
  async function reload(background = false) {
    take(await api<StudyView>(`/api/studies/${first.id}`, { background }))
  }
  const { user } = useSession()
  const byOthers = (notice: ChangeNotice) => notice.what !== 'presence' && notice.by !== user.value?.id
  useEventStream({ kind: 'study', id: () => first.id, only: byOthers }, () => void reload(true).catch(() => undefined))

  /** An act on the server, then a fresh copy. True when it was done; else `problem` says why. */
  /** One act after the other: an answer that overtakes a later one would show what is no longer true. */
  let turn: Promise<unknown> = Promise.resolve()
  function act(rest: string, method: 'POST' | 'PUT' | 'PATCH' | 'DELETE', body: object | (() => object) = {}): Promise<boolean> {
    const mine = turn.then(() => actNow(rest, method, typeof body === 'function' ? (body as () => object)() : body))
    turn = mine
    return mine
  }
  async function actNow(rest: string, method: 'POST' | 'PUT' | 'PATCH' | 'DELETE', body: object): Promise<boolean> {
    busy.value = true
    problem.value = null
    problemOf.value = rest
    try {
      await saving.flush()
      await api(path(rest), { method, body })
      await reload()
      turns.now()
      return true
    }
    catch (error) {
      problem.value = toApiError(error).body
      if (['changed-meanwhile', 'wrong-state'].includes(problem.value.code)) await reload().catch(() => undefined)
      return false
    }
    finally {
      busy.value = false
    }
  }

  /** What each run comes to: the run in hand is drawn anew first, the others a frame later each. */
  const assessed = shallowReactive(new Map(live.assessment.value.runs.map(run => [run.runId, run])))
  function drawRun(runId: string) {
    const now = live.assessment.value.runs.find(run => run.runId === runId)
    if (now) assessed.set(runId, now)
    else assessed.delete(runId)
  }
  watch(live.assessment, ({ runs }) => {
    const known = new Map(runs.map(run => [run.runId, run]))
    const changed = [...new Set([...known.keys(), ...assessed.keys()])].filter(runId => assessed.get(runId) !== known.get(runId))
    for (const runId of changed.sort((a, b) => Number(b === runInHand.value) - Number(a === runInHand.value))) turns.soon(runId, () => drawRun(runId))
  }, { flush: 'sync' })

  /** Open questions by cell, the stronger one where there are two. Each cell listens to its own key alone. */
  const askedAt = shallowReactive(new Map<string, 'stop' | 'check'>())
  syncMap(askedAt, openByCell(live.assessment.value.remarks))
  watch(() => live.assessment.value.remarks, () => turns.soon(askedAt, () => syncMap(askedAt, openByCell(live.assessment.value.remarks))), { flush: 'sync' })
  /** Why the server refused a cell, by its key. */
  const refusals = shallowReactive(new Map<string, string>())
  watch(() => saving.queue.value.refusals, found => syncMap(refusals, new Map(Object.entries(found).map(([key, { message }]) => [key, message]))), { immediate: true })
  /** From a cell to its question at the side, else to the first open one. */
  async function goToRemark(key: string) {
    turns.now()
    await nextTick()
    const list = [...document.querySelectorAll<HTMLElement>('[data-remark-for]')]
    const found = list.find(item => item.dataset.remarkFor === key) ?? list[0]
    found?.querySelector<HTMLElement>('button')?.focus()
  }

  /** What stood in this row in the latest earlier study of this patient that has it, by field, as it is printed. */
  function earlierOf(run: Run, row: RunRow): Record<string, string> {
    const values = view.value.earlier[`${run.technique}/${run.side}`]?.rows[row.site] ?? {}
    return Object.fromEntries(Object.entries(values).map(([field, entry]) => [field, entryText(entry, quantityOf(field as QuantityId).printDecimals)]))
  }
  const earlierSource = (run: Run) => view.value.earlier[`${run.technique}/${run.side}`]

  /** What stands in a cell now; the sheet may show it a frame later. */
  function contentOf(rowId: string, field: string): CellContent {
    const found = findRow(study.value, rowId)
    return found ? cellContent(found.row, field) : null
  }

  /** Against the revision that stands when its turn comes: two quick choices after each other do not contradict each other. */
  const changeRun = (runId: string, changes: object) => act(`runs/${runId}`, 'PATCH', () => ({ ...changes, revision: view.value.runRevisions[runId] ?? 0 }))

  return {
    view, study, drawn, redrawn, turns, policy, saving, assessment: live.assessment, assessed, isLive: live.live, liveProblem: live.problem, differences: live.differences, mayType, busy, problem, problemOf, at, runInHand, editor, explained, allColumns, notesOf, unaccepted,
    contentOf, preview, store, change, reload, act, changeRun, askedAt, goToRemark, earlierOf, earlierSource,
    undo: () => walk(undoStep(history.value)),
    redo: () => walk(redoStep(history.value)),
    refusal: (rowId: string, field: string) => refusals.get(cellKey({ rowId, field })) ?? '',
  }
}

export type Bench = ReturnType<typeof useBenchStudy>
export const benchKey: InjectionKey<Bench> = Symbol('bench')

/** The study at the bench, inside its page. */
export function useBench(): Bench {
  const bench = inject(benchKey)
  if (!bench) throw new Error('useBench is for components inside the bench page')
  return bench
}
