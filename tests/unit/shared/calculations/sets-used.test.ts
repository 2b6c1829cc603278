import { describe, expect, it } from 'vitest'
import { setsUsed } from '#shared/calculations/sets-used'
import type { AppliedLimit } from '#shared/calculations/types'
import { limitRow, tableOf } from './limit-fixtures'

const limit = (setId: string, rowId: string, changes: Partial<AppliedLimit> = {}): AppliedLimit => ({
  bound: 'upper', value: 4.4, unit: 'ms', setId, setVersion: 1, setTitle: `Set ${setId}`, rowId, subgroup: '', definition: '', percentile: 97, basis: 'read', verified: false, ...changes,
})
const recalled = (setId: string, rowId: string, verified = false) => limit(setId, rowId, { basis: 'from memory', verified })
const tables = [
  tableOf([limitRow()], { id: 'a', version: 1, citation: 'Invented paper A.', declared: { lowerPercentile: 3, upperPercentile: 97, words: '3rd and 97th percentile' } }),
  tableOf([limitRow()], { id: 'a', version: 2, citation: 'Invented paper A, second edition.', declared: { lowerPercentile: 5, upperPercentile: 95, words: '5th and 95th percentile' } }),
]
const used = (...limits: AppliedLimit[]) => setsUsed(new Set(limits), tables)
const short = (...limits: AppliedLimit[]) => used(...limits).map(({ setId, version, recalledRows, verifiedRows }) => `${setId} ${version}: ${recalledRows} recalled, ${verifiedRows} compared`)

describe('the sets whose limits were applied', () => {
  it('with title, citation and percentiles of that version', () => {
    expect(used(limit('a', '1', { setVersion: 2 }))).toEqual([{ setId: 'a', version: 2, title: 'Set a', citation: 'Invented paper A, second edition.', percentiles: '5th and 95th percentile', recalledRows: 0, verifiedRows: 0 }])
    expect(used(limit('a', '1'))).toEqual([{ setId: 'a', version: 1, title: 'Set a', citation: 'Invented paper A.', percentiles: '3rd and 97th percentile', recalledRows: 0, verifiedRows: 0 }])
  })
  it('without citation where the table is not at hand', () => {
    expect(used(limit('gone', '1'))).toEqual([{ setId: 'gone', version: 1, title: 'Set gone', citation: '', percentiles: '', recalledRows: 0, verifiedRows: 0 }])
  })
  it.each([
    ['none applied', [], []],
    ['read rows are not recalled', [limit('a', '1'), limit('a', '2', { basis: 'derived' })], ['a 1: 0 recalled, 0 compared']],
    ['recalled rows', [recalled('a', '1'), recalled('a', '2'), limit('a', '3')], ['a 1: 2 recalled, 0 compared']],
    ['some compared with the paper', [recalled('a', '1', true), recalled('a', '2')], ['a 1: 2 recalled, 1 compared']],
    ['a read row has no need of it', [limit('a', '1', { verified: true })], ['a 1: 0 recalled, 0 compared']],
    ['a row used twice counts once', [recalled('a', '1', true), recalled('a', '1', true)], ['a 1: 1 recalled, 1 compared']],
    ['rows of the same name in two sets', [recalled('b', '1'), recalled('a', '1')], ['a 1: 1 recalled, 0 compared', 'b 1: 1 recalled, 0 compared']],
    ['versions by number', [limit('a', '1', { setVersion: 10 }), limit('a', '1', { setVersion: 2 })], ['a 2: 0 recalled, 0 compared', 'a 10: 0 recalled, 0 compared']],
    ['by name, whatever their order', [limit('c', '1'), limit('a', '1'), limit('b', '1')], ['a 1: 0 recalled, 0 compared', 'b 1: 0 recalled, 0 compared', 'c 1: 0 recalled, 0 compared']],
  ])('%s', (_, limits, lines) => expect(short(...limits)).toEqual(lines))
})
