import { describe, expect, it } from 'vitest'
import type { LimbTemperature, Run, Study } from '#shared/schemas/study'
import { assess, remarkOf, studyWith } from '../study-maker'
import { asked, left, right } from './asking'

const codes = ['temperature-high', 'temperature-elsewhere', 'temperature-missing', 'cold', 'warming-short']
const reading = (id: string, celsius: number, changes: Partial<LimbTemperature> = {}): LimbTemperature => ({ id, segment: 'hand', side: 'right', celsius, warmed: false, ...changes })
const at = (...temperatures: LimbTemperature[]): Partial<Study> => ({ temperatures })
const motor = (changes: Partial<Run> = {}) => right('median-motor-apb', [['wrist', { latencyMs: 3.5, amplitudeMv: 8 }]], changes)
const ulnar = (changes: Partial<Run> = {}) => ({ ...right('ulnar-motor-adm', [['wrist', { latencyMs: 2.9 }]]), id: 'u', ...changes })
const sural = () => left('sural', [['calf', { amplitudeUv: 10 }]])

describe('a skin too warm', () => {
  it.each([
    ['38 °C', at(reading('t', 38)), []],
    ['more', at(reading('t', 38.14)), ['check temperature-high/t: 38.1 °C is warm for the skin of a hand: check the probe.']],
    ['of a foot', at(reading('t', 39, { segment: 'foot' })), ['check temperature-high/t: 39.0 °C is warm for the skin of a foot: check the probe.']],
  ])('%s', (_, study, lines) => expect(asked(codes, [], study)).toEqual(lines))
})

describe('a reading that a run names', () => {
  const elsewhere = (what: string) => [`check temperature-elsewhere/r: RIGHT median motor names a temperature ${what}: choose one of the RIGHT hand.`]
  const readings = at(reading('own', 33), reading('other', 33, { side: 'left' }), reading('foot', 33, { segment: 'foot' }))
  it.each([
    ['its own limb', motor({ temperatureId: 'own' }), []],
    ['none', motor(), []],
    ['the other side', motor({ temperatureId: 'other' }), elsewhere('of the LEFT hand')],
    ['another limb', motor({ temperatureId: 'foot' }), elsewhere('of the RIGHT foot')],
    ['one that was removed', motor({ temperatureId: 'gone' }), elsewhere('that no longer exists')],
    ['where none is needed', right('blink', [['supraorbital', { r1Ms: 11 }]], { temperatureId: 'gone' }), []],
    ['a run that was not measured', right('median-motor-apb', [['wrist', {}]], { temperatureId: 'gone' }), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run], readings)).toEqual(lines))
})

/** No temperature counts as cold: decisions, temperature. 32 °C for hands and 30 °C for feet: AANEM review of 1991, from memory. */
describe('cold limbs', () => {
  const missing = (limb: string, key: string) => `check temperature-missing/${key}: Enter the temperature of the ${limb}: without one the limb counts as cold, and slowing cannot be judged.`
  const cold = (run: string, name: string, because: string) => `check cold/${run}: ${name} was recorded cold (${because}): slowing is not interpretable.`
  it.each([
    ['32 °C', [motor()], at(reading('t', 32)), []],
    ['31.9 °C', [motor()], at(reading('t', 31.9)), [cold('r', 'RIGHT median motor', 'RIGHT hand 31.9 °C, below 32 °C')]],
    ['each run of the limb', [motor(), ulnar()], at(reading('t', 28)), [cold('r', 'RIGHT median motor', 'RIGHT hand 28.0 °C, below 32 °C'), cold('u', 'RIGHT ulnar motor', 'RIGHT hand 28.0 °C, below 32 °C')]],
    ['no temperature, once for the limb', [motor(), ulnar()], at(), [missing('RIGHT hand', 'right-hand')]],
    ['and for each limb', [motor(), sural()], at(), [missing('RIGHT hand', 'right-hand'), missing('LEFT foot', 'left-foot')]],
    ['interpreted all the same', [motor({ interpretColdBecause: 'could not be warmed' })], at(reading('t', 28)), []],
    ['nothing measured', [right('median-motor-apb', [['wrist', { distanceMm: 80 }]])], at(), []],
    ['repeated warm', [{ ...motor({ temperatureId: 'c' }), id: 'a' }, { ...motor({ temperatureId: 'w' }), id: 'b', repeats: 'a' }], at(reading('c', 28), reading('w', 33)), []],
    ['the face', [right('blink', [['supraorbital', { r1Ms: 11 }]])], at(), []],
  ] as [string, Run[], Partial<Study>, string[]][])('%s', (_, runs, study, lines) => expect(asked(codes, runs, study)).toEqual(lines))

  it('offers to warm and to repeat', () => {
    expect(remarkOf(assess(studyWith([motor()], at(reading('t', 28)))), 'cold')?.suggestion).toEqual({ sentence: 'Warm the limb and repeat the run.', addTechnique: 'median-motor-apb', side: 'right' })
  })
})

/** 25 minutes from 28 °C: Drenthen et al. 2008, read. */
describe('warming', () => {
  const clock = (minutes: number) => new Date(Date.UTC(2026, 11, 2, 9, minutes)).toISOString()
  const before = (celsius: number, minutes = 0, changes: Partial<LimbTemperature> = {}) => reading(`b${minutes}`, celsius, { at: clock(minutes), ...changes })
  const after = (minutes: number, changes: Partial<LimbTemperature> = {}) => reading('w', 34, { warmed: true, at: clock(minutes), ...changes })
  const short = (minutes: number, celsius: string, limb = 'RIGHT hand') => [`note warming-short/w: The ${limb} was warmed for ${minutes} minutes from ${celsius} °C: skin warms before the nerve, 25 minutes are safer.`]
  it.each([
    ['24 minutes', [before(28), after(24)], short(24, '28.0')],
    ['25 minutes', [before(28), after(25)], []],
    ['in whatever order the readings stand', [after(10), before(28)], short(10, '28.0')],
    ['from the last reading before', [before(25), before(29, 20), after(30)], short(10, '29.0')],
    ['just under 32 °C', [before(31.9), after(10)], short(10, '31.9')],
    ['from 32 °C', [before(32), after(10)], []],
    ['a foot', [before(28, 0, { segment: 'foot', side: 'left' }), after(10, { segment: 'foot', side: 'left' })], short(10, '28.0', 'LEFT foot')],
    ['another side was cold', [before(28, 0, { side: 'left' }), after(10)], []],
    ['another limb was', [before(28, 0, { segment: 'foot' }), after(10)], []],
    ['not warmed by anybody', [before(28), after(10, { warmed: false })], []],
    ['nobody knows when', [before(28, 0, { at: undefined }), after(10)], []],
    ['warmed before it was measured', [after(0), before(28, 10)], []],
  ])('%s', (_, temperatures, lines) => expect(asked(['warming-short'], [], at(...temperatures))).toEqual(lines))
})
