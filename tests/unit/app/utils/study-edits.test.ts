import { describe, expect, it } from 'vitest'
import { techniqueOf } from '../../../../shared/catalogue/nerves'
import { studySchema, type Run, type Study } from '../../../../shared/schemas/study'
import { emptyHistory, redo, remember, undo } from '../../../../app/utils/grid-history'
import { groupRuns } from '../../../../app/utils/run-labels'
import { runProgress } from '../../../../app/utils/run-progress'
import { cellContent, withCell } from '../../../../app/utils/study-edits'

const study: Study = studySchema.parse({
  id: 's', studyDate: '2026-12-02', patient: { birthDate: '1974-03-14', sexForLimits: 'female' },
  runs: [
    { id: 'a', technique: 'median-motor-apb', side: 'left', rows: [{ id: 'a1', site: 'wrist', values: { latencyMs: 3.9 } }] },
    { id: 'b', technique: 'sural', side: 'left', rows: [{ id: 'b1', site: 'calf' }] },
    { id: 'c', technique: 'needle-apb', side: 'right', rows: [{ id: 'c1', site: 'rest' }] },
  ],
})

it('changes one cell and leaves every other run the same object', () => {
  const next = withCell(study, 'a1', 'amplitudeMv', 8.1)
  expect(next.runs[0]?.rows[0]?.values).toEqual({ latencyMs: 3.9, amplitudeMv: 8.1 })
  expect(next.runs[1]).toBe(study.runs[1])
  expect(study.runs[0]?.rows[0]?.values).toEqual({ latencyMs: 3.9 })
})

it.each([
  ['a1', 'latencyMs', 'no-response'], ['a1', 'latencyMs', null], ['c1', 'ordinal:fibrillations', '2+'], ['c1', 'ordinal:fibrillations', null], ['b1', 'series', [28.1, 'no-response']], ['b1', 'series', null],
] as const)('%s %s holds %j', (rowId, field, content) => {
  const next = withCell(study, rowId, field, content as never)
  const row = next.runs.flatMap(run => run.rows).find(each => each.id === rowId)!
  expect(cellContent(row, field)).toEqual(content)
  expect(studySchema.safeParse(next).success).toBe(true)
})

it('undo and redo walk over single cells and pasted blocks', () => {
  const one = { rowId: 'a1', field: 'latencyMs', before: 3.9, after: 4.2 }
  const two = { rowId: 'a1', field: 'amplitudeMv', before: null, after: 8 }
  let history = remember(remember(emptyHistory(), [one]), [two, { ...one, before: 4.2, after: 5 }])
  const back = undo(history)!
  expect(back.edits).toEqual([{ ...one, before: 5, after: 4.2 }, { ...two, before: 8, after: null }])
  history = undo(back.history)!.history
  expect(undo(history)).toBeNull()
  expect(redo(history)?.edits).toEqual([one])
  expect(redo(remember(history, [two]))).toBeNull()
})

it('runs stand by limb and side, RIGHT before LEFT', () => {
  expect(groupRuns(study.runs).map(group => group.title)).toEqual(['RIGHT ARM', 'LEFT ARM', 'LEFT LEG'])
})

describe('how far a run is', () => {
  const technique = techniqueOf('median-motor-apb')!
  const wrist = { latencyMs: 3.9, amplitudeMv: 8.1, distanceMm: 80 }
  const table: { name: string, values: object[], run?: Partial<Run>, is: string }[] = [
    { name: 'nothing typed', values: [{}, {}], is: 'left' },
    { name: 'one row of two', values: [wrist, {}], is: 'begun' },
    { name: 'a distance missing', values: [wrist, { latencyMs: 7.8, amplitudeMv: 8 }], is: 'begun' },
    { name: 'all there', values: [wrist, { latencyMs: 7.8, amplitudeMv: 8, distanceMm: 210 }], is: 'done' },
    { name: 'no response answers for its row', values: [wrist, { latencyMs: 'no-response' }], is: 'done' },
    { name: 'left out with a reason', values: [{}, {}], run: { notDoneBecause: 'ulcer' }, is: 'not-done' },
  ]
  it.each(table)('$name: $is', ({ values, run, is }) => {
    const rows = values.map((each, index) => ({ id: `r${index}`, site: index ? 'elbow' : 'wrist', values: each }))
    expect(runProgress(technique, { id: 'x', technique: technique.id, side: 'left', rows, ...run } as Run)).toBe(is)
  })
})
