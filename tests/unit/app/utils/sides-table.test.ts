import { expect, it } from 'vitest'
import type { ComparisonAssessment, Result } from '#shared/calculations/types'
import { studySchema } from '#shared/schemas/study'
import { nerveTitle, sidesTable } from '../../../../app/utils/reading/sides-table'
import { above, assessmentOf, resultOf, runWith, within } from '../../../fixtures/report-source'

const wrist = (latencyMs: number) => ({ site: 'wrist', values: { latencyMs, distanceMm: 80 }, verdicts: { latencyMs: within('upper', 4.4, 'ms') } })
const elbow = { site: 'elbow', values: { latencyMs: 9.2, distanceMm: 215, velocityMps: 54 } }
const right = runWith('r', 'median-motor-apb', 'right', [{ ...wrist(5.2), verdicts: { latencyMs: above(4.4, 'ms') } }, elbow])
const left = runWith('l', 'median-motor-apb', 'left', [wrist(3.9)])
const cold = runWith('c', 'median-motor-apb', 'right', [wrist(6.1)])
const study = studySchema.parse({ id: 'study', studyDate: '2026-12-02', patient: { birthDate: '1974-03-14', sexForLimits: 'female' }, runs: [cold.run, right.run, left.run] })
const difference: Result = { ...resultOf('', '', 'latencyMs', 1.3, above(0.7, 'ms'), 'right'), key: 'compare/side', quantity: 'sideDifferenceMs', label: 'latency, side difference', at: 'latencyMs' }
const sideDifference: ComparisonAssessment = { id: 'side-difference/median-motor-apb', title: 'median motor', runIds: ['r', 'l'], results: [difference] }

function table(comparisons: ComparisonAssessment[] = []) {
  const repeated = { ...cold.assessment, supersededBy: 'r' }
  return sidesTable(study, assessmentOf([repeated, right.assessment, left.assessment], { comparisons }))
}

it('pairs the same site and quantity of both sides in one line', () => {
  const [group] = table()
  expect(group?.title).toMatch(/^Median motor/)
  expect(group?.rows.map(row => [row.label, row.right?.print, row.left?.print])).toEqual([['latency', '5.2', '3.9'], ['latency', '9.2', undefined], ['velocity', '54', undefined]])
})

it('a run that was repeated warm stands apart and never pairs with a run that counts', () => {
  const groups = table()
  expect(groups.map(group => [group.superseded, group.right?.runId, group.left?.runId])).toEqual([[false, 'r', 'l'], [true, 'c', undefined]])
})

it('no value of one side ever lands on the other', () => {
  for (const row of table().flatMap(group => group.rows)) {
    expect([row.right?.side, row.left?.side]).toEqual([row.right ? 'right' : undefined, row.left ? 'left' : undefined])
  }
})

it('a side difference stands in the first line of its quantity, once', () => {
  const rows = table([sideDifference]).flatMap(group => group.rows)
  expect(rows.map(row => row.difference?.print ?? '')).toEqual(['1.3', '', '', ''])
})

it('comparisons within a limb make one group with both sides', () => {
  const comparison = (side: 'right' | 'left', entry: number): ComparisonAssessment =>
    ({ id: 'median-ulnar-sensory', title: `Median against ulnar, ${side.toUpperCase()}`, side, runIds: [], results: [{ ...resultOf('', '', 'onsetLatencyMs', entry, within('upper', 0.5, 'ms'), side), key: `compare/${side}`, quantity: 'onsetDifferenceMs', label: 'sensory onset difference' }] })
  const groups = table([comparison('right', 1.1), comparison('left', 0.2)])
  expect(groups.at(-1)?.title).toBe('Median against ulnar')
  expect(groups.at(-1)?.rows.map(row => [row.right?.print, row.left?.print])).toEqual([['1.1', '0.2']])
})

it.each([['RIGHT median motor, APB', 'Median motor, APB'], ['LEFT sural', 'Sural'], ['Median against ulnar', 'Median against ulnar']])('%s is headed %s', (title, head) => {
  expect(nerveTitle({ title })).toBe(head)
})
