import { describe, expect, it } from 'vitest'
import { findLimit } from '#shared/calculations/find-limit'
import { judge, notCold, type ColdBearing } from '#shared/calculations/judge'
import { askerFor, type Recorded } from '#shared/calculations/limit-asker'
import { decimalsFor, quantityInfo } from '#shared/calculations/quantity-info'
import { printLimit } from '#shared/calculations/round-for-print'
import { defaultPolicy, type AppliedLimit } from '#shared/calculations/types'
import { adopt, limitRow, query, shelfOf, tableOf } from './limit-fixtures'
import { verdictLine } from './result-lines'

/** 140 mm over 3.5 ms are 40 m/s: where a set has no velocity, its onset latency stands for it (number 11 of the decisions on numbers). */
describe('a velocity limit from the onset latency', () => {
  const derived = (part: Parameters<typeof limitRow>[0]) => {
    const row = limitRow({ technique: 'sural', quantity: 'onsetLatencyMs', at: null, value: 3.5, distanceMm: 140, ...part })
    const found = findLimit(shelfOf(tableOf([row])), query({ technique: 'sural', quantity: 'velocityMps', at: 'calf', distanceMm: 140 }))
    return found.kind === 'limits' ? found.lower : found
  }
  it.each<[name: string, part: Parameters<typeof limitRow>[0], expected: unknown]>([
    ['read', { basis: 'read' }, { bound: 'lower', value: 40, unit: 'm/s', basis: 'derived', derivation: 'from onset latency 3.5 ms at 140 mm', percentile: null }],
    ['from memory stays so', { basis: 'from memory' }, { basis: 'from memory' }],
    ['the other end of the percentiles', { kind: 'percentile', percentile: 97 }, { percentile: 3 }],
    ['not from a lower limit', { bound: 'lower' }, { kind: 'no-limit' }],
    ['not without a distance', { distanceMm: null }, { kind: 'no-limit' }],
    ['not from mean and SD', { kind: 'mean-sd', value: null, mean: 3, sd: 0.2, sdMultiple: 2 }, { kind: 'no-limit' }],
  ])('%s', (_, part, expected) => expect(derived(part)).toMatchObject(expected as object))
})

describe('a value in a cold limb', () => {
  const limit = (bound: 'upper' | 'lower', value: number): AppliedLimit => ({ bound, value, unit: '', setId: 's', setVersion: 1, setTitle: 's', rowId: 'r', subgroup: '', definition: '', percentile: 97, basis: 'read', verified: false })
  const [upper, lower] = [limit('upper', 10), limit('lower', 5)]
  const [all, part]: ColdBearing[] = [{ state: 'all', words: 'RIGHT hand 28.0 °C' }, { state: 'part', words: 'RIGHT hand 28.0 °C' }]
  const slow = 'cold, not interpretable as slowing: RIGHT hand 28.0 °C'
  const masked = 'may be masked by cold: RIGHT hand 28.0 °C'
  it.each<[effect: Parameters<typeof judge>[2], value: number, cold: ColdBearing, verdict: string]>([
    ['lengthens', 11, all!, `cold ≤ 10 ≥ 5: ${slow}`],
    ['lengthens', 4, all!, 'outside ≤ 10 ≥ 5, below'],
    ['lengthens', 7, all!, 'within ≤ 10 ≥ 5'],
    ['lengthens', 7, part!, `cold ≤ 10 ≥ 5: ${masked}`],
    ['lengthens', 11, part!, `cold ≤ 10 ≥ 5: ${slow}`],
    ['slows', 4, all!, `cold ≤ 10 ≥ 5: ${slow}`],
    ['slows', 11, all!, 'outside ≤ 10 ≥ 5, above'],
    ['slows', 7, part!, `cold ≤ 10 ≥ 5: ${masked}`],
    ['hides-loss', 7, all!, `cold ≤ 10 ≥ 5: ${masked}`],
    ['hides-loss', 4, all!, 'outside ≤ 10 ≥ 5, below'],
    ['hides-excess', 7, all!, `cold ≤ 10 ≥ 5: ${masked}`],
    ['hides-excess', 11, all!, 'outside ≤ 10 ≥ 5, above'],
    ['none', 7, all!, 'within ≤ 10 ≥ 5'],
    ['lengthens', 11, notCold, 'outside ≤ 10 ≥ 5, above'],
  ])('%s, %f, %o: %s', (effect, value, cold, verdict) => expect(verdictLine(judge({ kind: 'value', value }, { kind: 'limits', upper, lower }, effect, cold))).toBe(verdict))
  it.each<[effect: Parameters<typeof judge>[2], one: 'upper' | 'lower', verdict: string]>([
    ['hides-loss', 'upper', 'within ≤ 10'], ['hides-loss', 'lower', `cold ≥ 5: ${masked}`], ['hides-excess', 'upper', `cold ≤ 10: ${masked}`], ['hides-excess', 'lower', 'within ≥ 5'],
  ])('%s with an %s limit alone', (effect, one, verdict) => expect(verdictLine(judge({ kind: 'value', value: 7 }, { kind: 'limits', [one]: one === 'upper' ? upper : lower }, effect, all!))).toBe(verdict))
  it.each([['technical', 'not recordable for technical reasons'], ['not-done', 'not done'], ['stopped', 'stopped at the patient\'s wish']] as const)('%s is not judged: %s', (absence, because) => {
    expect(judge({ kind: 'absent', absence }, { kind: 'limits', upper }, 'none', notCold)).toEqual({ kind: 'not-judged', because })
  })
  it('limits without a row are none', () => expect(judge({ kind: 'value', value: 7 }, { kind: 'limits' }, 'none', notCold)).toEqual({ kind: 'no-limit', because: 'no row fits' }))
})

/** Answers are kept between assessments: never those of another person, way of recording, policy or set. */
describe('the answers of the sets', () => {
  const table = (value: number, part: Parameters<typeof limitRow>[0] = {}) => tableOf([limitRow({ value, distanceMm: null, ...part })])
  const [first, second] = [table(4), table(5)]
  const policy = (...tables: ReturnType<typeof table>[]) => ({ ...defaultPolicy, adopted: tables.map(one => adopt(one)) })
  const { person } = query()
  const way: Recorded = { technique: 'median-motor-apb', direction: null, amplitudeDefinition: null, distanceMm: 80 }
  const answer = (tables: ReturnType<typeof table>[], recorded: Partial<Recorded> = {}, who: Partial<typeof person> = {}) => {
    const found = askerFor(tables, policy(first), { ...person, ...who })({ ...way, ...recorded }).ask('latencyMs', 'wrist')
    return found.kind === 'limits' ? found.upper?.value : found.because
  }
  it('are those of the tables given', () => {
    expect([answer([first]), answer([second]), answer([first, second]), answer([second, first]), answer([]), answer([first])]).toEqual([4, 5, 4, 5, 'the adopted set invented, version 1, is not at hand', 4])
  })
  const strict = tableOf([limitRow({ value: 4, distanceMm: 80, direction: 'antidromic', amplitudeDefinition: 'onset-to-peak' })])
  const usual: Partial<Recorded> = { direction: 'antidromic', amplitudeDefinition: 'onset-to-peak' }
  it.each<[name: string, recorded: Partial<Recorded>, expected: unknown]>([
    ['as the limit has it', usual, 4],
    ['over another distance', { ...usual, distanceMm: 70 }, 'distance 70 mm is not the set\'s 80 mm'],
    ['in another direction', { ...usual, direction: 'orthodromic' }, 'the set\'s limit is for antidromic recording'],
    ['measured otherwise', { ...usual, amplitudeDefinition: 'peak-to-peak' }, 'the set\'s limit is for amplitude onset to peak'],
    ['another technique', { ...usual, technique: 'ulnar-motor-adm' }, 'the adopted sets have none for it'],
  ])('%s', (_, recorded, expected) => {
    expect(answer([strict], usual)).toBe(4)
    expect(answer([strict], recorded)).toBe(expected)
  })
  const banded = tableOf([limitRow({ value: 4, distanceMm: null, sex: 'female', ageMaxYears: 59, heightMaxCm: 170, bmiMax: 30 })])
  it.each<[name: string, who: Partial<typeof person>, expected: unknown]>([
    ['the same person', {}, 4], ['older', { ageYears: 60 }, 'age 60 is outside up to 59'], ['a man', { sexForLimits: 'male' }, 'the set has none for men'], ['taller', { heightCm: 170 }, 'height 170 cm is outside the set'], ['heavier', { bmi: 30 }, 'BMI 30 is outside the set'],
  ])('%s', (_, who, expected) => {
    expect(answer([banded])).toBe(4)
    expect(answer([banded], {}, who)).toBe(expected)
  })
  it('are those of the place and quantity asked for', () => {
    const asker = askerFor([first], policy(first), person)(way)
    expect([asker.ask('latencyMs', 'wrist').kind, asker.ask('latencyMs', 'elbow').kind, asker.ask('amplitudeMv', 'wrist').kind, asker.ask('latencyMs', 'wrist').kind]).toEqual(['limits', 'no-limit', 'no-limit', 'limits'])
  })
})

describe('decimals', () => {
  it.each([['amplitudeUv', 9.9, 1], ['amplitudeUv', 10, 0], ['amplitudeUv', -9.9, 1], ['latencyMs', 3, 1], ['velocityMps', 9, 0], ['sideDifferenceUv', 5, 1], ['unheardOf', 5, 2]] as const)('%s of %f: %i', (id, value, decimals) => expect(decimalsFor(quantityInfo(id), value)).toBe(decimals))
  it.each([[4, 1, '4.0'], [4.25, 1, '4.25'], [42.424, 0, '42.42'], [42.4, 0, '42.4'], [0.125, 1, '0.125'], [0.1254, 1, '0.125']])('a limit of %f with %i: %s', (value, decimals, text) => expect(printLimit(value, decimals)).toBe(text))
})
