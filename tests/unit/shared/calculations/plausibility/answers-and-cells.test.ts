import { describe, expect, it } from 'vitest'
import { cellsBehind, cellsOf, holdsStill, withoutFallenAnswers } from '#shared/calculations/plausibility/kept-answer'
import { addRemark, remarkList, runName } from '#shared/calculations/plausibility/remark'
import type { KeptCheck, Study } from '#shared/schemas/study'
import { assess, remarkOf, studyWith } from '../study-maker'
import { left, right } from './asking'

/** A run of each kind of cell: two entries, a series, a step of a scale; and one more run of the same limb, side or technique. */
const motor = right('median-motor-apb', [['wrist', { latencyMs: 3.5, distanceMm: 80 }]])
const train = { ...right('repetitive-ulnar-adm', [['rest', {}, [8, 'no-response']]]), id: 't', rows: [{ id: 't-0', site: 'rest', values: {}, series: [8, 'no-response' as const] }] }
const needle = { ...right('needle-apb', []), id: 'n', rows: [{ id: 'n-0', site: 'muscle', values: {}, ordinals: { fibrillations: '2+' } }] }
const other = left('median-motor-apb', [['wrist', { latencyMs: 3.4 }]])
const sural = { ...right('sural', [['calf', { amplitudeUv: 10 }]]), id: 's', rows: [{ id: 's-0', site: 'calf', values: { amplitudeUv: 10 } }] }
const study = studyWith([motor, train, needle, other, sural])
const all = { 'r-0/latencyMs': 3.5, 'r-0/distanceMm': 80, 't-0/series': [8, 'no-response'], 'n-0/ordinal:fibrillations': '2+', 'l-0/latencyMs': 3.4, 's-0/amplitudeUv': 10 }
const own = { 'r-0/latencyMs': 3.5, 'r-0/distanceMm': 80 }

describe('the cells that a question rests on', () => {
  it.each([
    ['of one cell', { code: 'unusual', runId: 'r', rowId: 'r-0', quantity: 'latencyMs' }, { 'r-0/latencyMs': 3.5 }],
    ['of one distance', { code: 'distance-unusual', runId: 'r', rowId: 'r-0', quantity: 'distanceMm' }, { 'r-0/distanceMm': 80 }],
    ['of a short segment', { code: 'short-segment', runId: 'r', rowId: 'r-0', quantity: 'distanceMm' }, { 'r-0/distanceMm': 80 }],
    ['of a latency too short', { code: 'latency-too-short', runId: 'r', rowId: 'r-0', quantity: 'latencyMs' }, { 'r-0/latencyMs': 3.5 }],
    ['of an H latency', { code: 'h-range', runId: 'r', rowId: 'r-0', quantity: 'latencyMs' }, { 'r-0/latencyMs': 3.5 }],
    ['of a cell that is blank: its run', { code: 'unusual', runId: 'r', rowId: 'r-0', quantity: 'amplitudeMv' }, own],
    ['of several cells: its run', { code: 'velocity-unusual', runId: 'r', rowId: 'r-0', quantity: 'latencyMs' }, own],
    ['of a series', { code: 'train-keeps-falling', runId: 't', rowId: 't-0' }, { 't-0/series': [8, 'no-response'] }],
    ['of a scale', { code: 'anything', runId: 'n' }, { 'n-0/ordinal:fibrillations': '2+' }],
    ['of the two sides', { code: 'sides-identical', runId: 'r' }, { ...own, 'l-0/latencyMs': 3.4 }],
    ['of two recordings', { code: 'recorded-twice', runId: 'l' }, { ...own, 'l-0/latencyMs': 3.4 }],
    ['of a limb', { code: 'temperature-missing/right-hand' }, { ...own, 't-0/series': [8, 'no-response'] }],
    ['of another limb', { code: 'temperature-missing/right-foot' }, { 's-0/amplitudeUv': 10 }],
    ['of the study', { code: 'side-unlike-referral' }, all],
    ['of a run that is gone: of the study', { code: 'recorded-twice', runId: 'gone' }, all],
  ])('%s', (_, remark, cells) => expect(cellsBehind(study, remark)).toEqual(cells))

  it('every cell of the study by its key', () => expect(Object.fromEntries(cellsOf(study))).toEqual(all))
})

describe('cells that still hold what they held', () => {
  it.each([
    ['the same number', { 'r-0/latencyMs': 3.5 }, true],
    ['another number', { 'r-0/latencyMs': 3.6 }, false],
    ['one of two changed', { 'r-0/latencyMs': 3.5, 'r-0/distanceMm': 81 }, false],
    ['the same series', { 't-0/series': [8, 'no-response' as const] }, true],
    ['another series', { 't-0/series': [8, 7.5] }, false],
    ['a cell that is gone', { 'x-0/latencyMs': 3.5 }, false],
    ['none', {}, true],
  ])('%s: %s', (_, bound, holds) => expect(holdsStill(bound, cellsOf(study))).toBe(holds))
})

describe('answers whose values were changed', () => {
  const answer = (key: string, cells?: KeptCheck['cells']): KeptCheck => ({ key, reason: 'Measured twice.', ...(cells && { cells }) })
  const with_ = (...keptChecks: KeptCheck[]): Study => ({ ...study, keptChecks })
  it('fall, the others stay', () => {
    expect(withoutFallenAnswers(with_(answer('a', { 'r-0/latencyMs': 3.5 }), answer('b', { 'r-0/latencyMs': 9 }), answer('c'))).keptChecks.map(one => one.key)).toEqual(['a', 'c'])
  })
  it('nothing else of the study changes', () => expect(withoutFallenAnswers(with_(answer('b', { 'r-0/latencyMs': 9 })))).toEqual(study))
  it.each([
    ['none given', with_()],
    ['all stand', with_(answer('a', { 'r-0/latencyMs': 3.5 }), answer('c'))],
  ])('%s: the study itself', (_, given) => expect(withoutFallenAnswers(given)).toBe(given))
})

describe('a kept question', () => {
  const asking = studyWith([right('median-motor-apb', [['wrist', { latencyMs: 16 }]])])
  const { key, sentence } = remarkOf(assess(asking), 'unusual')!
  it.each([
    ['bound to its key alone', { key }, 'Measured twice.'],
    ['bound to its words', { key, sentence }, 'Measured twice.'],
    ['to other words', { key, sentence: 'Latency at wrist was asked about otherwise.' }, undefined],
    ['bound to its cell', { key, cells: { 'r-0/latencyMs': 16 } }, 'Measured twice.'],
    ['to another value', { key, cells: { 'r-0/latencyMs': 17 } }, undefined],
    ['to a blank cell', { key, cells: { 'r-0/amplitudeMv': 8 } }, undefined],
    ['another question', { key: `${key}/other` }, undefined],
  ])('%s', (_, answer, kept) => {
    expect(remarkOf(assess({ ...asking, keptChecks: [{ reason: 'Measured twice.', ...answer }] }), 'unusual')?.kept).toBe(kept)
  })
  it('what has no answer has no word of one', () => expect('kept' in remarkOf(assess(asking), 'unusual')!).toBe(false))
})

describe('a remark', () => {
  const added = (part: Partial<Parameters<typeof addRemark>[1]>) => {
    const list = remarkList(study)
    addRemark(list, { code: 'any', strength: 'note', sentence: 'Look.', ...part })
    return list.remarks[0]
  }
  it.each([
    ['of the study', {}, 'any'],
    ['of a run', { runId: 'r' }, 'any/r'],
    ['of a row', { runId: 'r', rowId: 'r-0' }, 'any/r/r-0'],
    ['of a cell', { runId: 'r', rowId: 'r-0', quantity: 'latencyMs' }, 'any/r/r-0/latencyMs'],
  ])('%s has its key', (_, part, key) => expect(added(part)?.key).toBe(key))
  it('rests on common practice unless it says more', () => {
    expect(added({})?.source).toBe('common practice')
    expect(added({ source: 'a paper (read)' })?.source).toBe('a paper (read)')
  })
  it('names its run by side and technique', () => {
    expect(runName({ run: motor, technique: undefined })).toBe('RIGHT median-motor-apb')
    expect(runName({ run: other, technique: { label: 'median motor' } as never })).toBe('LEFT median motor')
  })
})
