import { expect, it } from 'vitest'
import { moveInGrid, type GridMove, type GridSheet } from '../../../../app/utils/grid-moves'

const sheets: GridSheet[] = [
  { runId: 'motor', rows: [{ rowId: 'wrist', fields: ['latency', 'amplitude', 'distance'] }, { rowId: 'elbow', fields: ['latency', 'amplitude', 'distance', '=velocity'] }] },
  { runId: 'empty', rows: [] },
  { runId: 'sensory', rows: [{ rowId: 'digit', fields: ['onset', 'peak', '=velocity'] }] },
]

it.each([
  ['wrist', 'latency', 'right', 'wrist', 'amplitude'],
  ['wrist', 'latency', 'left', null, null],
  ['wrist', 'distance', 'right', null, null],
  ['elbow', 'distance', 'right', 'elbow', '=velocity'],
  ['wrist', 'amplitude', 'down', 'elbow', 'amplitude'],
  ['elbow', 'latency', 'down', 'digit', 'onset'],
  ['elbow', '=velocity', 'down', 'digit', '=velocity'],
  ['digit', 'peak', 'down', null, null],
  ['digit', 'peak', 'up', 'elbow', 'amplitude'],
  ['wrist', 'latency', 'up', null, null],
  ['wrist', 'distance', 'next', 'elbow', 'latency'],
  ['elbow', 'distance', 'next', 'digit', 'onset'],
  ['elbow', '=velocity', 'next', 'digit', 'onset'],
  ['elbow', '=velocity', 'previous', 'elbow', 'distance'],
  ['digit', 'onset', 'previous', 'elbow', 'distance'],
  ['digit', 'peak', 'next', null, null],
  ['elbow', 'distance', 'home', 'elbow', 'latency'],
  ['elbow', 'latency', 'end', 'elbow', 'distance'],
  ['digit', 'peak', 'first', 'wrist', 'latency'],
  ['wrist', 'latency', 'last', 'digit', 'peak'],
] as const)('%s %s, %s: %s %s', (rowId, field, move, toRow, toField) => {
  const to = moveInGrid(sheets, { runId: '', rowId, field }, move as GridMove)
  expect(to && [to.rowId, to.field]).toEqual(toRow === null ? null : [toRow, toField])
})

it('from a row that was removed, the grid starts again', () => {
  expect(moveInGrid(sheets, { runId: 'motor', rowId: 'gone', field: 'latency' }, 'down')?.rowId).toBe('wrist')
})
