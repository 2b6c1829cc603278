import type { CellContent } from './study-edits'

/** One change of one cell; several of them (a pasted block) make one step. */
export interface CellEdit { rowId: string, field: string, before: CellContent, after: CellContent }
export interface GridHistory { done: CellEdit[][], undone: CellEdit[][] }

const longest = 500

export const emptyHistory = (): GridHistory => ({ done: [], undone: [] })

/** Remembers a step; what was undone before it cannot be redone any more. */
export function remember(history: GridHistory, step: CellEdit[]): GridHistory {
  if (step.length === 0) return history
  return { done: [...history.done, step].slice(-longest), undone: [] }
}

const reversed = (step: CellEdit[]) => step.map(edit => ({ ...edit, before: edit.after, after: edit.before })).reverse()

/** Takes the last step back: the edits to make, and the history afterwards. Null when there is none. */
export function undo(history: GridHistory): { edits: CellEdit[], history: GridHistory } | null {
  const step = history.done.at(-1)
  return step ? { edits: reversed(step), history: { done: history.done.slice(0, -1), undone: [...history.undone, step] } } : null
}

/** Makes the step that was taken back last once more. Null when there is none. */
export function redo(history: GridHistory): { edits: CellEdit[], history: GridHistory } | null {
  const step = history.undone.at(-1)
  return step ? { edits: step, history: { done: [...history.done, step], undone: history.undone.slice(0, -1) } } : null
}
