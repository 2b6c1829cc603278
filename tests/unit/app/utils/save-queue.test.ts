import { describe, expect, it } from 'vitest'
import type { SavedCell } from '../../../../shared/schemas/bench'
import { emptyQueue, enqueue, resolveConflict, settle, takeBatch, takeFresh, unsavedCells, type SaveQueue } from '../../../../app/utils/save-queue'

let serial = 0
const newId = () => `save${++serial}`
const start = () => emptyQueue({ 'r/latencyMs': 3 })
const saved = (queue: SaveQueue, revision: number): SavedCell[] => queue.inFlight.map(({ saveId, rowId, field }) => ({ saveId, rowId, field, saved: true, revision, savedAt: '2026-12-02T10:00:00Z' }))
const conflicted = (queue: SaveQueue, entry: number): SavedCell[] => queue.inFlight.map(({ saveId, rowId, field }) => ({ saveId, rowId, field, saved: false, because: 'changed-meanwhile', theirs: { entry, revision: 9, by: 'B. Invented', at: '2026-12-02T10:00:00Z' } }))

it('sends the latest value of a cell once, against the revision last seen', () => {
  const queue = takeBatch(enqueue(enqueue(start(), 'r', 'latencyMs', 4), 'r', 'latencyMs', 5), newId)
  expect(queue.inFlight).toMatchObject([{ rowId: 'r', field: 'latencyMs', entry: 5, revision: 3 }])
  expect(queue.waiting).toEqual({})
})

it('a batch that was not answered is repeated as it was, with the same save id, and what is typed meanwhile waits', () => {
  const sent = takeBatch(enqueue(start(), 'r', 'latencyMs', 4), newId)
  const later = takeBatch(enqueue(sent, 'r', 'latencyMs', 5), newId)
  expect(later.inFlight).toEqual(sent.inFlight)
  const after = takeBatch(settle(later, saved(later, 4)), newId)
  expect(after.inFlight).toMatchObject([{ entry: 5, revision: 4 }])
  expect(after.inFlight[0]?.saveId).not.toBe(sent.inFlight[0]?.saveId)
})

describe('someone else changed the cell', () => {
  const sent = takeBatch(enqueue(start(), 'r', 'latencyMs', 4), newId)
  const asked = settle(sent, conflicted(sent, 7))
  it('both values wait for a choice and nothing is sent', () => {
    expect(asked.conflicts['r/latencyMs']).toMatchObject({ mine: 4, theirs: { entry: 7, by: 'B. Invented' } })
    expect(takeBatch(enqueue(asked, 'r', 'latencyMs', 8), newId).inFlight).toEqual([])
  })
  it('mine goes out against their revision', () => {
    expect(takeBatch(resolveConflict(asked, 'r/latencyMs', 'mine'), newId).inFlight).toMatchObject([{ entry: 4, revision: 9 }])
  })
  it('theirs sends nothing', () => {
    const queue = resolveConflict(asked, 'r/latencyMs', 'theirs')
    expect(unsavedCells(queue)).toEqual([])
    expect(queue.revisions['r/latencyMs']).toBe(9)
  })
  it('the same value from both is no conflict', () => {
    expect(settle(sent, conflicted(sent, 4)).conflicts).toEqual({})
  })
})

it('a refused cell keeps its sentence until it is typed anew', () => {
  const sent = takeBatch(enqueue(start(), 'r', 'latencyMs', 400), newId)
  const refused = settle(sent, sent.inFlight.map(({ saveId, rowId, field }) => ({ saveId, rowId, field, saved: false, because: 'not-valid' as const, message: 'Latency must be between 0.3 and 100 ms.' })))
  expect(refused.refusals['r/latencyMs']?.message).toContain('Latency')
  expect(enqueue(refused, 'r', 'latencyMs', 4).refusals).toEqual({})
})

it('nothing unacknowledged is ever lost: under way, waiting and in conflict are all laid over a fresh copy', () => {
  let queue = takeBatch(enqueue(start(), 'r', 'latencyMs', 4), newId)
  queue = settle(queue, conflicted(queue, 7))
  queue = takeBatch(enqueue(queue, 'r', 'amplitudeMv', 6), newId)
  queue = enqueue(queue, 'r', 'distanceMm', 210)
  expect(unsavedCells(queue)).toEqual([
    { rowId: 'r', field: 'amplitudeMv', entry: 6 }, { rowId: 'r', field: 'latencyMs', entry: 4 }, { rowId: 'r', field: 'distanceMm', entry: 210 },
  ])
})

it('a cell the answer forgot goes back in line', () => {
  const sent = takeBatch(enqueue(start(), 'r', 'latencyMs', 4), newId)
  expect(settle(sent, []).waiting['r/latencyMs']).toMatchObject({ entry: 4 })
})

describe('a fresh copy of the study never hides what somebody else stored', () => {
  const waiting = enqueue(start(), 'r', 'latencyMs', 4)
  it.each([
    { name: 'a cell that waits', queue: waiting, editing: undefined, revision: 3 },
    { name: 'a cell under way', queue: takeBatch(waiting, newId), editing: undefined, revision: 3 },
    { name: 'a cell that is being typed into', queue: start(), editing: 'r/latencyMs', revision: 3 },
    { name: 'a cell nobody touches', queue: start(), editing: undefined, revision: 5 },
  ])('$name: revision $revision', ({ queue, editing, revision }) => {
    expect(takeFresh(queue, { 'r/latencyMs': 5 }, editing).revisions['r/latencyMs']).toBe(revision)
  })
  it('a cell up for a choice keeps the revision of the value that is shown', () => {
    const sent = takeBatch(waiting, newId)
    const open = settle(sent, conflicted(sent, 7))
    expect(takeFresh(open, { 'r/latencyMs': 12 }).revisions['r/latencyMs']).toBe(9)
  })
})
