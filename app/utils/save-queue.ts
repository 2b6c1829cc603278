import type { SaveCell, SavedCell } from '#shared/schemas/bench'
import { cellKey } from './grid-moves'
import { sameContent, type CellContent } from './study-edits'

/** A cell that someone else changed meanwhile: both values wait for a choice. */
export interface CellConflict { rowId: string, field: string, mine: CellContent, theirs: { entry: CellContent, revision: number, by: string, at: string } }
export interface CellRefusal { rowId: string, field: string, entry: CellContent, message: string }

/**
 * What is typed and not acknowledged yet. A batch under way stays exactly as it was sent until it is answered, because
 * after a broken connection nobody knows whether it arrived: it is repeated with the same save ids, which the server
 * answers as before. What is typed meanwhile waits, the latest value of each cell once.
 */
export interface SaveQueue {
  waiting: Record<string, { rowId: string, field: string, entry: CellContent }>
  inFlight: SaveCell[]
  revisions: Record<string, number>
  conflicts: Record<string, CellConflict>
  refusals: Record<string, CellRefusal>
}

export const emptyQueue = (revisions: Record<string, number>): SaveQueue => ({ waiting: {}, inFlight: [], revisions, conflicts: {}, refusals: {} })

function drop<T>(record: Record<string, T>, key: string): Record<string, T> {
  return Object.fromEntries(Object.entries(record).filter(([name]) => name !== key))
}

/** Puts a cell in line; a later value of the same cell takes the earlier one's place. */
export function enqueue(queue: SaveQueue, rowId: string, field: string, entry: CellContent): SaveQueue {
  const key = cellKey({ rowId, field })
  return { ...queue, waiting: { ...queue.waiting, [key]: { rowId, field, entry } }, refusals: drop(queue.refusals, key) }
}

/**
 * The batch to send now: the one under way when it was not answered, else all that waits, except cells in conflict.
 *
 * @param newId makes the id under which a repeat is recognised
 */
export function takeBatch(queue: SaveQueue, newId: () => string, largest = 400): SaveQueue {
  if (queue.inFlight.length > 0) return queue
  const ready = Object.entries(queue.waiting).filter(([key]) => !queue.conflicts[key]).slice(0, largest)
  const inFlight = ready.map(([key, { rowId, field, entry }]) => ({ saveId: newId(), rowId, field, entry, revision: queue.revisions[key] ?? 0 }))
  const taken = new Set(ready.map(([key]) => key))
  return { ...queue, inFlight, waiting: Object.fromEntries(Object.entries(queue.waiting).filter(([key]) => !taken.has(key))) }
}

function settleOne(queue: SaveQueue, answer: SavedCell, sent: SaveCell): SaveQueue {
  const key = cellKey(answer)
  if (answer.saved) return { ...queue, revisions: { ...queue.revisions, [key]: answer.revision } }
  if (answer.because === 'not-valid') return { ...queue, refusals: { ...queue.refusals, [key]: { rowId: sent.rowId, field: sent.field, entry: sent.entry as CellContent, message: answer.message } } }
  const mine = queue.waiting[key]?.entry ?? sent.entry
  const theirs = { ...answer.theirs, entry: answer.theirs.entry as CellContent }
  const revisions = { ...queue.revisions, [key]: theirs.revision }
  if (sameContent(mine, theirs.entry)) return { ...queue, revisions, waiting: drop(queue.waiting, key) }
  return { ...queue, revisions, conflicts: { ...queue.conflicts, [key]: { rowId: sent.rowId, field: sent.field, mine, theirs } } }
}

/** Takes in the server's answers; a cell without an answer goes back in line, unless it was typed anew. */
export function settle(queue: SaveQueue, answers: SavedCell[]): SaveQueue {
  const next = queue.inFlight.reduce((state, sent) => {
    const answer = answers.find(each => each.saveId === sent.saveId)
    if (answer) return settleOne(state, answer, sent)
    const key = cellKey(sent)
    return { ...state, waiting: { [key]: { rowId: sent.rowId, field: sent.field, entry: sent.entry }, ...state.waiting } }
  }, queue)
  return { ...next, inFlight: [] }
}

/** Ends a conflict: mine goes in line against the revision now known; theirs needs nothing more. */
export function resolveConflict(queue: SaveQueue, key: string, choice: 'mine' | 'theirs'): SaveQueue {
  const conflict = queue.conflicts[key]
  if (!conflict) return queue
  const rest = { ...queue, conflicts: drop(queue.conflicts, key) }
  return choice === 'mine' ? enqueue(rest, conflict.rowId, conflict.field, queue.waiting[key]?.entry ?? conflict.mine) : { ...rest, waiting: drop(rest.waiting, key) }
}

/**
 * The revisions of a fresh copy of the study; they only ever grow, so the larger one is the later. A cell that is typed
 * into, not acknowledged yet or up for a choice keeps the one it was seen with: otherwise a value that somebody else stored meanwhile
 * would be overwritten unseen instead of being put up for a choice.
 */
export function takeFresh(queue: SaveQueue, fresh: Record<string, number>, editing?: string): SaveQueue {
  const inHand = new Set([...Object.keys(queue.waiting), ...queue.inFlight.map(cellKey), ...Object.keys(queue.conflicts), ...editing ? [editing] : []])
  const later = Object.entries(fresh).filter(([key, revision]) => !inHand.has(key) && revision > (queue.revisions[key] ?? 0))
  return { ...queue, revisions: { ...queue.revisions, ...Object.fromEntries(later) } }
}

/** What the page shows that the server has not acknowledged: laid over every fresh copy of the study. */
export function unsavedCells(queue: SaveQueue): { rowId: string, field: string, entry: CellContent }[] {
  const conflicts = Object.values(queue.conflicts).map(({ rowId, field, mine }) => ({ rowId, field, entry: mine }))
  return [...queue.inFlight.map(({ rowId, field, entry }) => ({ rowId, field, entry: entry as CellContent })), ...conflicts, ...Object.values(queue.waiting)]
}

const keysOf = (queue: SaveQueue) => new Set(unsavedCells(queue).map(cellKey))
const pick = <T>(record: Record<string, T>, wanted: (key: string) => boolean): Record<string, T> => Object.fromEntries(Object.entries(record).filter(([key]) => wanted(key)))

/** What of a queue must outlive the page: everything not acknowledged, with the revision each cell was seen with. */
export function unsentPart(queue: SaveQueue): SaveQueue {
  const keys = keysOf(queue)
  return { ...queue, revisions: pick(queue.revisions, key => keys.has(key)), refusals: {} }
}

/**
 * Takes a queue that a closed tab left into the one of this page. A batch that was under way is repeated under its own
 * ids; a cell typed here since then is the later word of the same person.
 */
export function mergeKept(queue: SaveQueue, kept: SaveQueue): SaveQueue {
  const mine = keysOf(queue)
  const isLeft = (key: string) => !mine.has(key)
  return {
    ...queue,
    waiting: { ...pick(kept.waiting, isLeft), ...queue.waiting },
    inFlight: [...queue.inFlight, ...kept.inFlight],
    conflicts: { ...pick(kept.conflicts, isLeft), ...queue.conflicts },
    revisions: { ...queue.revisions, ...pick(kept.revisions, isLeft) },
  }
}

/** Nothing more is wanted of what is unsent: it is dropped. */
export const dropUnsent = (queue: SaveQueue): SaveQueue => ({ ...queue, waiting: {}, inFlight: [], conflicts: {} })

/**
 * Sends a queue to its end without a page. What the server refuses goes back in line: the person sees it when the study
 * is opened. `keep` is awaited before each batch leaves, so that a repeat has the same ids.
 * @throws what `put` throws
 */
export async function sendQueue(queue: SaveQueue, put: (cells: SaveCell[]) => Promise<SavedCell[]>, makeId: () => string, keep: (queue: SaveQueue) => Promise<void>): Promise<SaveQueue> {
  let state = queue
  while (Object.keys(state.refusals).length === 0) {
    const batch = takeBatch(state, makeId)
    if (batch.inFlight.length === 0) return state
    await keep(batch)
    state = settle(batch, await put(batch.inFlight))
  }
  return Object.values(state.refusals).reduce((left, { rowId, field, entry }) => enqueue(left, rowId, field, entry), state)
}
