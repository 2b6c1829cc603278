import { expect, it } from 'vitest'
import { techniqueOf } from '../../../../shared/catalogue/nerves'
import type { Run } from '../../../../shared/schemas/study'
import { columnsOf } from '../../../../app/utils/grid-columns'
import { blockText, parseBlock, planPaste } from '../../../../app/utils/grid-paste'

const technique = techniqueOf('ulnar-motor-adm')!
const run: Run = { id: 'u', technique: technique.id, side: 'right', rows: [
  { id: 'w', site: 'wrist', values: { latencyMs: 2.9, amplitudeMv: 9.6 } },
  { id: 'b', site: 'below-elbow', values: { latencyMs: 'no-response' } },
] }
const columns = columnsOf(technique, run, false)

it('seldom used columns are there when wanted or filled', () => {
  expect(columns.map(column => column.field)).toEqual(['latencyMs', 'amplitudeMv', 'durationMs', 'distanceMm'])
  expect(columnsOf(technique, run, true).map(column => column.field)).toContain('areaMvMs')
  const filled = { ...run, rows: [{ id: 'w', site: 'wrist', values: { areaMvMs: 30 } }] }
  expect(columnsOf(technique, filled, false).map(column => column.field)).toContain('areaMvMs')
})

it.each([
  { text: '3.4', block: null },
  { text: '3.4\n', block: null },
  { text: '3.4\t5', block: [['3.4', '5']] },
  { text: '3.4\r\n5,1\r\n', block: [['3.4'], ['5,1']] },
])('clipboard $text', ({ text, block }) => expect(parseBlock(text)).toEqual(block))

it('names rows, columns and units, reads commas, leaves blanks alone, and says what did not fit', () => {
  const plan = planPaste([['3,1', '', '5.4'], ['6.4', '9,4', '5.6'], ['8.1', '9.2', '5.8']], { rowIndex: 0, columnIndex: 0 }, technique, run, columns)
  expect(plan.cells.map(cell => [cell.row, cell.column, cell.unit, cell.before, cell.content])).toEqual([
    ['wrist', 'latency', 'ms', '2.9', 3.1], ['wrist', 'duration', 'ms', '', 5.4],
    ['below elbow', 'latency', 'ms', 'no response', 6.4], ['below elbow', 'amplitude', 'mV', '', 9.4], ['below elbow', 'duration', 'ms', '', 5.6],
  ])
  expect(plan.leftOut).toBe('1 row did not fit into this run and is left out.')
})

it('a value that cannot be right is named with its sentence', () => {
  const plan = planPaste([['6.4', '9400']], { rowIndex: 1, columnIndex: 0 }, technique, run, columns)
  expect(plan.cells[1]?.problem).toContain('Was 9400 read in µV?')
})

it('copies a block so that it can be pasted back', () => {
  const text = blockText(run, columns, { rowIndex: 1, columnIndex: 1 }, { rowIndex: 0, columnIndex: 0 })
  expect(text).toBe('2.9\t9.6\nno response\t')
  expect(planPaste(parseBlock(text)!, { rowIndex: 0, columnIndex: 0 }, technique, run, columns).cells.map(cell => cell.content)).toEqual([2.9, 9.6, 'no-response'])
})
