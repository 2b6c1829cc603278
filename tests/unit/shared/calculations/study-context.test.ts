import { describe, expect, it } from 'vitest'
import { isMeasured, recordedRun, standingRun, studyContext } from '#shared/calculations/study-context'
import { coldOfRun, countsAsCold, readingOfRun, temperatureContext, thresholdFor } from '#shared/calculations/temperature'
import { defaultPolicy, type Policy } from '#shared/calculations/types'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { LimbTemperature, Run, RunRow, Study } from '#shared/schemas/study'
import { adopt, limitRow, tableOf } from './limit-fixtures'
import { run, studyWith } from './study-maker'

const contextOf = (runs: Run[], changes: Partial<Study> = {}) => studyContext(studyWith(runs, changes), [], defaultPolicy)

describe('the person in words', () => {
  const born = (birthDate: string, sexForLimits: Study['patient']['sexForLimits']) => ({ patient: { birthDate, sexForLimits } })
  it.each<[changes: Partial<Study>, words: string]>([
    [born('1974-03-14', 'female'), 'woman of 52, 162 cm, BMI 28.2'],
    [born('1974-03-14', 'male'), 'man of 52, 162 cm, BMI 28.2'],
    [born('2008-12-03', 'male'), 'boy of 17, 162 cm, BMI 28.2'],
    [born('2008-12-02', 'male'), 'man of 18, 162 cm, BMI 28.2'],
    [born('2008-12-03', 'female'), 'girl of 17, 162 cm, BMI 28.2'],
    [born('2026-07-02', 'female'), 'girl of 5 months, 162 cm, BMI 28.2'],
    [born('1974-03-14', null), 'person (sex missing) of 52, 162 cm, BMI 28.2'],
    [born('2027-01-01', 'female'), 'woman of unknown age, 162 cm, BMI 28.2'],
    [{ heightCm: null }, 'woman of 52, height missing, BMI missing'],
    [{ heightCm: 162.5, weightKg: null }, 'woman of 52, 162.5 cm, BMI missing'],
  ])('%#: %s', (changes, words) => expect(contextOf([], changes).person.words).toBe(words))
  it('with the numbers that limits ask for', () => expect(contextOf([]).person).toMatchObject({ ageYears: 52, sexForLimits: 'female', heightCm: 162, weightKg: 74, bmi: 28.2 }))
})

describe('was anything recorded', () => {
  const rows = (...list: Partial<RunRow>[]): Run => ({ id: 'r', technique: 'median-motor-apb', side: 'right', rows: list.map((row, index) => ({ id: `r-${index}`, site: 'wrist', values: {}, ...row })) })
  it.each<[name: string, run: Run, measured: boolean]>([
    ['a number', rows({ values: { latencyMs: 3.5 } }), true],
    ['an absence', rows({ values: { latencyMs: 'no-response' } }), true],
    ['in the second row', rows({}, { values: { latencyMs: 3.5 } }), true],
    ['a series', rows({ series: [28] }), true],
    ['a step of a scale', rows({ ordinals: { fibrillations: '0' } }), true],
    ['no row', rows(), false],
    ['blank rows', rows({}, {}), false],
    ['a way alone', rows({ values: { distanceMm: 80 } }), false],
    ['an empty series and scale', rows({ series: [], ordinals: {} }), false],
    ['not done, whatever stands there', { ...rows({ values: { latencyMs: 3.5 } }), notDoneBecause: 'plaster cast' }, false],
    ['a blank reason is none', { ...rows({ values: { latencyMs: 3.5 } }), notDoneBecause: ' ' }, true],
  ])('%s: %s', (_, one, measured) => expect(isMeasured(one)).toBe(measured))

  it('rows beside the line of the nerve stand apart', () => {
    const recorded = recordedRun(run('ulnar-motor-adm', 'right', [['median-elbow', { amplitudeMv: 3 }], ['wrist', { amplitudeMv: 9 }]]))
    expect([recorded.rows.map(one => one.row.site), recorded.asides.map(one => one.row.site)]).toEqual([['wrist'], ['median-elbow']])
    expect(recordedRun(run('unheard-of', 'right', [['wrist', { amplitudeMv: 9 }]]))).toMatchObject({ technique: undefined, rows: [], asides: [], measured: true })
  })
})

const hand = (id: string, celsius: number, changes: Partial<LimbTemperature> = {}): LimbTemperature => ({ id, segment: 'hand', side: 'right', celsius, warmed: false, ...changes })
const both = { temperatures: [hand('cold', 28), hand('warm', 33)] }
const motor = (id: string, changes: Partial<Run> = {}): Run => run('median-motor-apb', 'right', [['wrist', { latencyMs: 4 }]], { id, ...changes })

describe('which run stands for a nerve and side', () => {
  const standing = (runs: Run[]) => standingRun(contextOf(runs, both), 'median-motor-apb', 'right')?.run.id
  const [at9, at10] = ['2026-12-02T09:00:00Z', '2026-12-02T10:00:00Z']
  it.each<[name: string, runs: Run[], id: string | undefined]>([
    ['the only one', [motor('a', { temperatureId: 'warm' })], 'a'],
    ['warm before cold, though earlier', [motor('a', { temperatureId: 'warm', recordedAt: at9 }), motor('b', { temperatureId: 'cold', recordedAt: at10 })], 'a'],
    ['warm before cold, though later in the list', [motor('a', { temperatureId: 'cold' }), motor('b', { temperatureId: 'warm' })], 'b'],
    ['the later', [motor('b', { temperatureId: 'warm', recordedAt: at9 }), motor('a', { temperatureId: 'warm', recordedAt: at10 })], 'a'],
    ['the later, the other way round', [motor('a', { temperatureId: 'warm', recordedAt: at10 }), motor('b', { temperatureId: 'warm', recordedAt: at9 })], 'a'],
    ['one with a time before one without', [motor('b', { temperatureId: 'warm' }), motor('a', { temperatureId: 'warm', recordedAt: at9 })], 'a'],
    ['by id where nothing tells', [motor('b', { temperatureId: 'warm' }), motor('a', { temperatureId: 'warm' })], 'b'],
    ['not one that was not measured', [motor('a', { temperatureId: 'warm' }), { ...motor('b', { temperatureId: 'warm' }), rows: [] }], 'a'],
    ['none of the other side', [motor('a', { side: 'left' })], undefined],
    ['none of another technique', [motor('a', { technique: 'ulnar-motor-adm' })], undefined],
  ])('%s', (_, runs, id) => expect(standing(runs)).toBe(id))
})

describe('a warm repeat', () => {
  const before = (runs: Run[], changes: Partial<Study> = both) => contextOf(runs, changes).runs.map(one => one.supersededBy)
  const cold = motor('a', { temperatureId: 'cold' })
  const warm = (changes: Partial<Run> = {}) => motor('b', { temperatureId: 'warm', repeats: 'a', ...changes })
  it.each<[name: string, runs: Run[], superseded: (string | undefined)[]]>([
    ['stands in the place of the cold run', [cold, warm()], ['b', undefined]],
    ['whatever the order', [warm(), cold], [undefined, 'b']],
    ['not of a run that was warm', [motor('a', { temperatureId: 'warm' }), warm()], [undefined, undefined]],
    ['not when cold itself', [cold, warm({ temperatureId: 'cold' })], [undefined, undefined]],
    ['not when not measured', [cold, { ...warm(), rows: [] }], [undefined, undefined]],
    ['not of the other side', [cold, warm({ side: 'left' })], [undefined, undefined]],
    ['not of another technique', [cold, warm({ technique: 'ulnar-motor-adm' })], [undefined, undefined]],
    ['not when it says so of nothing', [cold, motor('b', { temperatureId: 'warm' })], [undefined, undefined]],
    ['not of a run that is gone', [cold, warm({ repeats: 'gone' })], [undefined, undefined]],
    ['not of itself', [motor('a', { temperatureId: 'cold', repeats: 'a' })], [undefined]],
    ['the last by id of two', [cold, warm(), warm({ id: 'c' })], ['c', undefined, undefined]],
    ['the last by id of two, the other way round', [cold, warm({ id: 'c' }), warm()], ['c', undefined, undefined]],
  ])('%s', (_, runs, superseded) => expect(before(runs)).toEqual(superseded))
  it('of a run without any temperature', () => {
    const onlyWarm = { temperatures: [hand('t', 33, { at: '2026-12-09T09:00:00Z' })], visits: [{ startedAt: '2026-12-09T08:00:00Z' }] }
    expect(before([motor('a', { recordedAt: '2026-12-02T09:00:00Z' }), motor('b', { recordedAt: '2026-12-09T09:30:00Z', repeats: 'a' })], onlyWarm)).toEqual(['b', undefined])
  })
})

describe('which temperature a run was recorded at', () => {
  const technique = techniqueOf('median-motor-apb')!
  const reading = (temperatures: LimbTemperature[], changes: Partial<Run> = {}, visits: string[] = []) =>
    readingOfRun(temperatureContext({ ...studyWith([]), temperatures, visits: visits.map(startedAt => ({ startedAt })) }, [], defaultPolicy), motor('m', changes), technique)?.id
  const clock = (hour: number) => `2026-12-02T${String(hour).padStart(2, '0')}:00:00Z`
  const timed = [hand('nine', 30, { at: clock(9) }), hand('eleven', 33, { at: clock(11) })]
  it.each<[name: string, temperatures: LimbTemperature[], run: Partial<Run>, id: string | undefined]>([
    ['the only one', [hand('t', 33)], {}, 't'],
    ['none', [], {}, undefined],
    ['the one it names', [hand('a', 28), hand('b', 33)], { temperatureId: 'a' }, 'a'],
    ['not one of another limb', [hand('a', 28, { segment: 'foot' }), hand('b', 33)], { temperatureId: 'a' }, 'b'],
    ['not one of the other side', [hand('a', 28, { side: 'left' }), hand('b', 33)], { temperatureId: 'a' }, 'b'],
    ['the latest before it', timed, { recordedAt: clock(12) }, 'eleven'],
    ['the one before it, not the later', timed, { recordedAt: clock(10) }, 'nine'],
    ['at the same minute', timed, { recordedAt: clock(11) }, 'eleven'],
    ['the next after it where there is none before', timed, { recordedAt: clock(8) }, 'nine'],
    ['the next after it, whatever the order', [...timed].reverse(), { recordedAt: clock(8) }, 'nine'],
    ['the latest where the run has no time', timed, {}, 'eleven'],
    ['the latest, whatever the order', [...timed].reverse(), {}, 'eleven'],
    ['the last of the list without times', [hand('a', 28), hand('b', 33)], {}, 'b'],
    ['one with a time before one without', [timed[0]!, hand('b', 33)], {}, 'nine'],
  ])('%s', (_, temperatures, changes, id) => expect(reading(temperatures, changes)).toBe(id))

  const week = [hand('first', 28, { at: clock(9) }), hand('second', 33, { at: '2026-12-09T09:00:00Z' })]
  const later = '2026-12-09T08:00:00Z'
  it.each<[name: string, temperatures: LimbTemperature[], run: Partial<Run>, id: string | undefined]>([
    ['of the first visit', week, { recordedAt: clock(12) }, 'first'],
    ['of the second', week, { recordedAt: '2026-12-09T12:00:00Z' }, 'second'],
    ['of the last where the run has no time', week, {}, 'second'],
    ['a reading without a time is of the first', [hand('untimed', 33)], {}, undefined],
    ['not one of another visit, though named', week, { recordedAt: clock(12), temperatureId: 'second' }, 'first'],
    ['a visit begins at its minute', [hand('first', 28, { at: clock(9) }), hand('second', 33, { at: later })], { recordedAt: later }, 'second'],
  ])('in two visits, %s', (_, temperatures, changes, id) => expect(reading(temperatures, changes, [later])).toBe(id))
  it('in three visits, whatever their order', () => {
    expect(reading([...week, hand('third', 34, { at: '2026-12-16T09:00:00Z' })], { recordedAt: '2026-12-09T12:00:00Z' }, ['2026-12-16T08:00:00Z', later])).toBe('second')
  })
})

describe('warm enough', () => {
  const table = (hands: number | null, feet: number | null, id = 'a') => tableOf([limitRow()], { id, minimumTemperatureC: { hand: hands, foot: feet } })
  const threshold = (technique: string, tables: ReturnType<typeof table>[], policy: Partial<Policy> = {}) =>
    thresholdFor(temperatureContext(studyWith([]), tables, { ...defaultPolicy, adopted: tables.map(one => adopt(one)), ...policy }), techniqueOf(technique)!)
  it.each<[name: string, technique: string, tables: ReturnType<typeof table>[], policy: Partial<Policy>, celsius: number]>([
    ['hand by policy', 'median-motor-apb', [], {}, 32],
    ['foot by policy', 'sural', [], {}, 30],
    ['hand by the set', 'median-motor-apb', [table(33, 31)], {}, 33],
    ['foot by the set', 'sural', [table(33, 31)], {}, 31],
    ['the stricter policy', 'median-motor-apb', [table(31, 29)], {}, 32],
    ['a set that says nothing', 'median-motor-apb', [table(null, null)], {}, 32],
    ['the strictest of two sets', 'sural', [table(33, 31), table(33, 32, 'b')], {}, 32],
    ['a set for other techniques', 'sural', [table(33, 31)], { adopted: [adopt({ id: 'a', version: 1 }, { techniques: ['median-motor-apb'] })] }, 30],
    ['a set for this one', 'sural', [table(33, 31)], { adopted: [adopt({ id: 'a', version: 1 }, { techniques: ['sural'] })] }, 31],
    ['another version', 'sural', [table(33, 31)], { adopted: [adopt({ id: 'a', version: 2 })] }, 30],
    ['not adopted', 'sural', [table(33, 31)], { adopted: [] }, 30],
  ])('%s', (_, technique, tables, policy, celsius) => expect(threshold(technique, tables, policy)).toBe(celsius))

  const state = (celsius: number | null, changes: Partial<Run> = {}, policy: Partial<Policy> = {}) => {
    const one = motor('m', changes)
    return coldOfRun(temperatureContext(studyWith([], { temperatures: celsius === null ? [] : [hand('t', celsius)] }), [], { ...defaultPolicy, ...policy }), one, techniqueOf(one.technique))
  }
  it('has its words', () => {
    expect(state(32)).toEqual({ state: 'warm', celsius: 32, thresholdC: 32, because: 'RIGHT hand 32.0 °C' })
    expect(state(31.94)).toEqual({ state: 'cold', celsius: 31.94, thresholdC: 32, because: 'RIGHT hand 31.9 °C, below 32 °C' })
    expect(state(31, {}, { handMinimumC: 31.5 }).because).toBe('RIGHT hand 31.0 °C, below 31.5 °C')
    expect(state(null)).toEqual({ state: 'unknown', celsius: null, thresholdC: 32, because: 'no temperature of the RIGHT hand' })
    expect(state(28, { technique: 'blink' })).toEqual({ state: 'not-needed', celsius: null, thresholdC: null, because: '' })
  })
  it.each([['cold', undefined, true], ['unknown', undefined, true], ['warm', undefined, false], ['not-needed', undefined, false], ['cold', 'could not be warmed', false], ['cold', ' ', true]] as const)('%s, with the reason %s, counts as cold: %s', (state, interpretColdBecause, counts) => {
    expect(countsAsCold({ state, celsius: null, thresholdC: null, because: '' }, { interpretColdBecause })).toBe(counts)
  })
})
