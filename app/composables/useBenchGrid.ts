import { useMediaQuery } from '@vueuse/core'
import type { InjectionKey } from 'vue'
import type { Run } from '#shared/schemas/study'
import { columnsOf } from '~/utils/grid-columns'
import { moveInGrid, type CellAddress, type GridMove, type GridSheet } from '~/utils/grid-moves'
import { blockText, parseBlock, planPaste, type PastePlan } from '~/utils/grid-paste'
import { groupRuns, techniqueFor, type RunGroup } from '~/utils/run-labels'
import { cellContent } from '~/utils/study-edits'
import type { Bench } from './useBenchStudy'

/** The last stop of a row: what the program says about it. */
export const WHY = '=why'

interface Block { runId: string, from: { rowIndex: number, columnIndex: number }, to: { rowIndex: number, columnIndex: number } }

const plainMoves: Record<string, GridMove> = { ArrowUp: 'up', ArrowDown: 'down', ArrowLeft: 'left', ArrowRight: 'right', Home: 'home', End: 'end' }

/** Left and right belong to the text while the cursor is inside it. */
function caretAllows(target: EventTarget | null, move: GridMove): boolean {
  if (target instanceof HTMLSelectElement) return move !== 'up' && move !== 'down'
  if (!(target instanceof HTMLInputElement) || (move !== 'left' && move !== 'right')) return true
  const { selectionStart, selectionEnd, value } = target
  if (selectionStart === 0 && selectionEnd === value.length) return true
  return move === 'left' ? selectionEnd === 0 : selectionStart === value.length
}

/**
 * The keys of a spreadsheet over all runs of the study: where they lead, blocks that are marked, copied and pasted.
 *
 * @example
 * const grid = useBenchGrid(bench)
 * // <div @keydown="grid.onKey" @paste="grid.onPaste" @copy="grid.onCopy">
 */
export function useBenchGrid(bench: Bench) {
  const pastePlan = shallowRef<(PastePlan & { runId: string }) | null>(null)
  const block = shallowRef<Block | null>(null)
  const root = shallowRef<HTMLElement | null>(null)
  /** From this width on a sheet has no scroll bar of its own (see BenchRunSheet). */
  const rowsFit = useMediaQuery('(min-width: 1181px)')

  const groups = computed<RunGroup[]>(before => groupRuns(bench.drawn.value.runs, before))
  const explainable = computed(() => new Set(bench.assessment.value.runs.flatMap(run => run.results.map(result => result.rowId))))
  const sheets = computed<GridSheet[]>(() => groups.value.flatMap(group => group.runs).filter(({ run }) => !run.notDoneBecause).map(({ run, technique }) => {
    const fields = columnsOf(technique, run, bench.allColumns.value).map(column => column.field)
    return { runId: run.id, rows: run.rows.map(row => ({ rowId: row.id, fields: explainable.value.has(row.id) ? [...fields, WHY] : fields })) }
  }))

  const element = (to: CellAddress) => root.value?.querySelector<HTMLElement>(`[data-cell="${CSS.escape(`${to.rowId}/${to.field}`)}"]`)

  /** The whole run that is entered comes into view, so that the page stands still while it is typed. */
  function scrollTo(target: HTMLElement) {
    target.closest('section')?.scrollIntoView({ block: 'nearest' })
    target.scrollIntoView({ block: 'nearest' })
  }
  /** The cursor moves at once; scrolling makes the browser lay the page out and draw more of it, and has a frame of its own. */
  function focusCell(to: CellAddress | null, isInView = false) {
    const target = to && element(to)
    target?.focus({ preventScroll: true })
    if (target && !isInView) bench.turns.soon(scrollTo, () => scrollTo(target))
  }
  /** The first cell of a run, for the list of runs and for remarks. */
  function focusRun(runId: string, rowId?: string, field?: string) {
    const rows = sheets.value.find(sheet => sheet.runId === runId)?.rows ?? []
    const row = rows.find(each => each.rowId === rowId) ?? rows[0]
    if (row) focusCell({ runId, rowId: row.rowId, field: field && row.fields.includes(field) ? field : row.fields[0] ?? WHY })
    else document.getElementById(`run-${runId}`)?.focus()
  }

  function place(at: CellAddress): { run: Run, rowIndex: number, columnIndex: number } | null {
    const run = bench.study.value.runs.find(each => each.id === at.runId)
    if (!run) return null
    const columnIndex = columnsOf(techniqueFor(run.technique), run, bench.allColumns.value).findIndex(column => column.field === at.field)
    return columnIndex < 0 ? null : { run, rowIndex: run.rows.findIndex(row => row.id === at.rowId), columnIndex }
  }

  function go(event: KeyboardEvent, move: GridMove) {
    const at = bench.at.value
    if (!at) return
    const to = moveInGrid(sheets.value, at, move)
    if (!to && move !== 'next' && move !== 'previous') return event.preventDefault()
    if (bench.editor.value && !bench.editor.value.commit()) return event.preventDefault()
    if (!to) return
    event.preventDefault()
    block.value = null
    focusCell(to, rowsFit.value && to.rowId === at.rowId)
  }

  /** Shift with an arrow marks a block inside the run. */
  function mark(event: KeyboardEvent, move: GridMove) {
    const start = bench.at.value && place(bench.at.value)
    if (!start) return
    event.preventDefault()
    const from = block.value?.from ?? { rowIndex: start.rowIndex, columnIndex: start.columnIndex }
    const to = { ...(block.value?.to ?? from) }
    const columns = columnsOf(techniqueFor(start.run.technique), start.run, bench.allColumns.value)
    if (move === 'up') to.rowIndex = Math.max(0, to.rowIndex - 1)
    if (move === 'down') to.rowIndex = Math.min(start.run.rows.length - 1, to.rowIndex + 1)
    if (move === 'left') to.columnIndex = Math.max(0, to.columnIndex - 1)
    if (move === 'right') to.columnIndex = Math.min(columns.length - 1, to.columnIndex + 1)
    block.value = { runId: start.run.id, from, to }
  }

  function isMarked(runId: string, rowIndex: number, columnIndex: number): boolean {
    const marked = block.value
    if (!marked || marked.runId !== runId) return false
    const between = (value: number, a: number, b: number) => value >= Math.min(a, b) && value <= Math.max(a, b)
    return between(rowIndex, marked.from.rowIndex, marked.to.rowIndex) && between(columnIndex, marked.from.columnIndex, marked.to.columnIndex)
  }

  function clearBlock(event: KeyboardEvent) {
    const marked = block.value
    const run = marked && bench.study.value.runs.find(each => each.id === marked.runId)
    if (!run || !bench.mayType.value) return
    event.preventDefault()
    const columns = columnsOf(techniqueFor(run.technique), run, bench.allColumns.value)
    bench.change(run.rows.flatMap((row, rowIndex) => columns.flatMap((column, columnIndex) => isMarked(run.id, rowIndex, columnIndex)
      ? [{ rowId: row.id, field: column.field, before: cellContent(row, column.field), after: null }]
      : [])))
  }

  function walkHistory(event: KeyboardEvent, back: boolean) {
    event.preventDefault()
    if (bench.editor.value?.isDirty()) return bench.editor.value.reset()
    const to = back ? bench.undo() : bench.redo()
    void nextTick(() => focusCell(to))
  }

  function onKey(event: KeyboardEvent) {
    if (event.defaultPrevented || event.altKey || !(event.target as HTMLElement).closest('[data-cell]')) return
    const command = event.ctrlKey || event.metaKey
    const key = event.key.toLowerCase()
    if (command && (key === 'z' || key === 'y')) return walkHistory(event, key === 'z' && !event.shiftKey)
    if (event.key === '#' && bench.at.value) {
      event.preventDefault()
      return void (bench.notesOf.value = bench.at.value.runId)
    }
    if (event.key === 'Tab') return go(event, event.shiftKey ? 'previous' : 'next')
    if (event.key === 'Enter' && !(event.target instanceof HTMLButtonElement)) return go(event, event.shiftKey ? 'up' : 'down')
    if ((event.key === 'Delete' || event.key === 'Backspace') && block.value) return clearBlock(event)
    const move = plainMoves[event.key]
    if (!move || (command && move !== 'home' && move !== 'end')) return
    if (event.shiftKey && event.key.startsWith('Arrow')) return mark(event, move)
    if (command) return go(event, move === 'home' ? 'first' : 'last')
    if (caretAllows(event.target, move)) go(event, move)
  }

  function onPaste(event: ClipboardEvent) {
    const at = bench.at.value && place(bench.at.value)
    const pasted = parseBlock(event.clipboardData?.getData('text/plain') ?? '')
    if (!at || !pasted || !bench.mayType.value) return
    event.preventDefault()
    const technique = techniqueFor(at.run.technique)
    pastePlan.value = { runId: at.run.id, ...planPaste(pasted, at, technique, at.run, columnsOf(technique, at.run, bench.allColumns.value)) }
  }

  function onCopy(event: ClipboardEvent) {
    const marked = block.value
    const run = marked && bench.study.value.runs.find(each => each.id === marked.runId)
    if (!run) return
    event.preventDefault()
    event.clipboardData?.setData('text/plain', blockText(run, columnsOf(techniqueFor(run.technique), run, bench.allColumns.value), marked.from, marked.to))
  }

  /** Stores the previewed block as one step, so that one undo takes it back. */
  function acceptPaste() {
    const plan = pastePlan.value
    const run = plan && bench.study.value.runs.find(each => each.id === plan.runId)
    if (!plan || !run) return
    bench.change(plan.cells.filter(cell => !cell.problem).map((cell) => {
      const row = run.rows.find(each => each.id === cell.rowId)
      return { rowId: cell.rowId, field: cell.field, before: row ? cellContent(row, cell.field) : null, after: cell.content }
    }))
    closePaste()
  }
  function closePaste() {
    const at = bench.at.value
    pastePlan.value = null
    void nextTick(() => focusCell(at))
  }

  return { root, groups, sheets, block, pastePlan, isMarked, focusCell, focusRun, onKey, onPaste, onCopy, acceptPaste, closePaste }
}

export type BenchGrid = ReturnType<typeof useBenchGrid>
export const benchGridKey: InjectionKey<BenchGrid> = Symbol('bench-grid')
export function useGrid(): BenchGrid {
  const grid = inject(benchGridKey)
  if (!grid) throw new Error('useGrid is for components inside the bench page')
  return grid
}
