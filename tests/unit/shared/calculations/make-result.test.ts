import { describe, expect, it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import type { FoundLimit } from '#shared/calculations/find-limit'
import { notCold } from '#shared/calculations/judge'
import { makeResult, type Owner, type ResultInput } from '#shared/calculations/make-result'
import { studyContext } from '#shared/calculations/study-context'
import { defaultPolicy, type AppliedLimit, type Result } from '#shared/calculations/types'
import { adopt, limitRow, tableOf } from './limit-fixtures'
import { run, studyWith } from './study-maker'
import { verdictLine } from './result-lines'

const limit = (bound: 'upper' | 'lower', value: number, changes: Partial<AppliedLimit> = {}): AppliedLimit =>
  ({ bound, value, unit: 'ms', setId: 'a', setVersion: 1, setTitle: 'A', rowId: 'row', subgroup: '', definition: '', percentile: 97, basis: 'read', verified: false, ...changes })
const found = (...limits: AppliedLimit[]): FoundLimit => ({ kind: 'limits', ...Object.fromEntries(limits.map(one => [one.bound, one])) })
const owner: Owner = { keyStart: 'r/r-0/', cold: notCold }
const plain: ResultInput = { quantity: 'latencyMs', label: 'latency at wrist', typed: true, value: { kind: 'value', value: 5 } }

function make(input: Partial<ResultInput>, whose: Partial<Owner> = {}, answer?: FoundLimit) {
  const context = studyContext(studyWith([]), [], defaultPolicy)
  const asked: [string, string | null][] = []
  const asker = answer && { ask: (quantity: string, at: string | null) => {
    asked.push([quantity, at])
    return answer
  } }
  const result = makeResult(context, { ...owner, ...whose }, { ...plain, asker, ...input })
  return { result, asked, context }
}

describe('a result', () => {
  it('has only what there is', () => {
    expect(make({}).result).toEqual<Result>({ key: 'r/r-0/latencyMs', quantity: 'latencyMs', label: 'latency at wrist', unit: 'ms', typed: true, value: { kind: 'value', value: 5 }, print: '5.0', printUncertainty: '', verdict: { kind: 'none' }, flagged: false })
    expect(Object.keys(make({}).result)).not.toContain('runId')
  })
  it('has all that is known', () => {
    const how = { formula: '5', source: 'arithmetic' }
    expect(make({ at: 'wrist', how, keyEnd: 'latencyMs/wrist', typed: false }, { runId: 'r', rowId: 'r-0', side: 'left' }).result).toEqual<Result>({
      key: 'r/r-0/latencyMs/wrist', runId: 'r', rowId: 'r-0', side: 'left', at: 'wrist', how, quantity: 'latencyMs', label: 'latency at wrist', unit: 'ms', typed: false, value: { kind: 'value', value: 5 }, print: '5.0', printUncertainty: '', verdict: { kind: 'none' }, flagged: false,
    })
  })
})

describe('the place that limits are asked for', () => {
  const none = found(limit('upper', 6))
  it.each<[name: string, input: Partial<ResultInput>, asked: [string, string | null][]]>([
    ['its own', { at: 'wrist' }, [['latencyMs', 'wrist']]],
    ['none', {}, [['latencyMs', null]]],
    ['another', { at: 'wrist', askAt: 'forearm' }, [['latencyMs', 'forearm']]],
    ['none although it has one', { at: 'wrist', askAt: null }, [['latencyMs', null]]],
    ['not asked where the reason is known', { noLimitBecause: 'recorded over 80 mm and 60 mm' }, []],
  ])('%s', (_, input, asked) => expect(make(input, {}, none).asked).toEqual(asked))
})

describe('the verdict', () => {
  const upper = found(limit('upper', 4.4))
  it.each<[name: string, input: Partial<ResultInput>, whose: Partial<Owner>, answer: FoundLimit | undefined, verdict: string, flagged: boolean]>([
    ['beyond its limit', {}, {}, upper, 'outside ≤ 4.4, above', true],
    ['within', { value: { kind: 'value', value: 4 } }, {}, upper, 'within ≤ 4.4', false],
    ['nearer than its uncertainty', { value: { kind: 'value', value: 4.35, uncertainty: 0.1 } }, {}, upper, 'within ≤ 4.4, near', false],
    ['between two limits', { value: { kind: 'value', value: 4 } }, {}, found(limit('upper', 4.4), limit('lower', 2)), 'within ≤ 4.4 ≥ 2', false],
    ['absent', { value: { kind: 'absent', absence: 'no-response' } }, {}, upper, 'absent ≤ 4.4', true],
    ['not to be judged', {}, {}, undefined, 'none', false],
    ['no limit', {}, {}, { kind: 'no-limit', because: 'no set adopted here' }, 'no-limit: no set adopted here', false],
    ['no limit of what stands beside', { supporting: true }, {}, { kind: 'no-limit', because: 'no set adopted here' }, 'none', false],
    ['a limit of what stands beside', { supporting: true }, {}, upper, 'outside ≤ 4.4, above', true],
    ['not judged, although it stands beside', { supporting: true }, {}, { kind: 'not-judged', because: 'age missing' }, 'not-judged: age missing', false],
    ['for a reason of its own', { noLimitBecause: 'recorded over 80 mm and 60 mm' }, {}, upper, 'no-limit: recorded over 80 mm and 60 mm', false],
    ['repeated warm', {}, { supersededBy: 'later' }, upper, 'superseded', false],
    ['a limit that another number is judged by', { quantity: 'velocityMps' }, {}, found(limit('lower', 42, { derivation: 'from onset latency 3.3 ms at 140 mm' })), 'no-limit: its limit comes from onset latency 3.3 ms at 140 mm, which stands for it', false],
    ['likewise from above', {}, {}, found(limit('upper', 42, { derivation: 'from another' })), 'no-limit: its limit comes from another, which stands for it', false],
    ['slow in the cold', {}, { cold: { state: 'all', words: 'RIGHT hand 28.0 °C' } }, upper, 'cold ≤ 4.4: cold, not interpretable as slowing: RIGHT hand 28.0 °C', false],
  ])('%s', (_, input, whose, answer, verdict, flagged) => {
    const { result } = make(input, whose, answer)
    expect([verdictLine(result.verdict), result.flagged]).toEqual([verdict, flagged])
  })
  it('says which run stands in its place', () => expect(make({}, { supersededBy: 'later' }, upper).result.verdict).toEqual({ kind: 'superseded', by: 'later' }))
  it('keeps what was applied, and the limits that the verdict does not carry', () => {
    const applied = (...args: Parameters<typeof make>) => [...make(...args).context.applied].map(one => one.value)
    expect(applied({}, {}, found(limit('upper', 4.4), limit('lower', 2)))).toEqual([4.4, 2])
    expect(applied({}, {}, undefined)).toEqual([])
    expect(applied({}, {}, found(limit('lower', 42, { derivation: 'from onset latency' })))).toEqual([])
    expect(applied({}, { supersededBy: 'later' }, upper)).toEqual([])
    const repeated = make({}, { supersededBy: 'later' }, upper)
    expect(repeated.context.limitsUnsaid.get(repeated.result)).toBe(upper)
    expect(make({}, {}, { kind: 'no-limit', because: 'none' }).context.limitsUnsaid.size).toBe(0)
  })
})

/** Latency 1 decimal, sensory amplitude 0 and 1 below 10 µV, one more where print would contradict the verdict: number 1 of the decisions on numbers. */
describe('the print', () => {
  it.each<[name: string, input: Partial<ResultInput>, answer: FoundLimit | undefined, print: string, uncertainty: string]>([
    ['rounded', { value: { kind: 'value', value: 4.35 } }, undefined, '4.4', ''],
    ['beside its limit', { quantity: 'velocityMps', value: { kind: 'value', value: 50.6 } }, found(limit('lower', 51)), '50.6', ''],
    ['small sensory amplitudes', { quantity: 'amplitudeUv', value: { kind: 'value', value: 6.44 } }, undefined, '6.4', ''],
    ['absent', { value: { kind: 'absent', absence: 'technical' } }, undefined, 'technical', ''],
    ['without a number', { value: { kind: 'not-computable', because: 'distance missing' } }, undefined, 'not computable', ''],
    ['uncertainty of what was typed is not printed', { value: { kind: 'value', value: 4, uncertainty: 0.1 } }, undefined, '4.0', ''],
    ['uncertainty of what was computed', { typed: false, value: { kind: 'value', value: 4, uncertainty: 0.14 } }, undefined, '4.0', '± 0.1'],
    ['with the decimals beside it', { typed: false, quantity: 'velocityMps', value: { kind: 'value', value: 50.6, uncertainty: 2.34 } }, found(limit('lower', 51)), '50.6', '± 2.3'],
    ['whole', { typed: false, quantity: 'velocityMps', value: { kind: 'value', value: 50, uncertainty: 2.34 } }, undefined, '50', '± 2'],
    ['one more where it would be 0', { typed: false, quantity: 'velocityMps', value: { kind: 'value', value: 50, uncertainty: 0.34 } }, undefined, '50', '± 0.3'],
    ['of one that is 0', { typed: false, quantity: 'velocityMps', value: { kind: 'value', value: 50, uncertainty: 0 } }, undefined, '50', '± 0'],
    ['none of an absence', { typed: false, value: { kind: 'absent', absence: 'no-response' } }, undefined, 'no response', ''],
  ])('%s', (_, input, answer, print, uncertainty) => {
    const { result } = make(input, {}, answer)
    expect([result.print, result.printUncertainty]).toEqual([print, uncertainty])
  })
})

/** z = (x - mean) / SD; at + 2 SD the 97.7th percentile: formula collection F7.1 and F7.3. */
describe('the z-score beside a limit of mean and SD', () => {
  const scoreBy = (row: Parameters<typeof limitRow>[0], latencyMs: number | 'no-response') => {
    const table = tableOf([limitRow(row)])
    const study = studyWith([run('median-motor-apb', 'right', [['wrist', { latencyMs, distanceMm: 80 }]])])
    const [result] = assessStudy(study, [table], { ...defaultPolicy, adopted: [adopt(table)] }).runs[0]!.results
    return [result!.zScore, result!.percentile]
  }
  const meanAndSd = { kind: 'mean-sd', value: null, mean: 3.5, sd: 0.5, sdMultiple: 2 } as const
  it.each<[name: string, row: Parameters<typeof limitRow>[0], latency: number | 'no-response', score: unknown[]]>([
    ['mean and SD', meanAndSd, 4.5, [2, expect.closeTo(97.725, 3)]],
    ['at the mean, never minus 0', meanAndSd, 3.5, [0, 50]],
    ['transformed', { ...meanAndSd, kind: 'transformed-mean-sd', scale: 'log', mean: 1, sd: 0.5 }, Math.E, [expect.closeTo(0, 12), expect.closeTo(50, 8)]],
    ['a regression', { kind: 'regression', value: null, sdMultiple: 2, regression: { intercept: 1, coefficients: { ageYears: 0.05 }, residualSd: 0.2 } }, 4, [expect.closeTo(2, 10), expect.closeTo(97.725, 3)]],
    ['a cut-off', {}, 4, [undefined, undefined]],
    ['a percentile with mean and SD beside it', { kind: 'percentile', percentile: 97, mean: 3.5, sd: 0.5 }, 4, [undefined, undefined]],
    ['no response', meanAndSd, 'no-response', [undefined, undefined]],
    ['no place on the scale', { ...meanAndSd, kind: 'transformed-mean-sd', scale: 'log', mean: 1, sd: 0.5 }, -1, [undefined, undefined]],
  ])('%s', (_, row, latency, score) => expect(scoreBy(row, latency)).toEqual(score))
  it('not where the table is not at hand, or the limit is derived', () => {
    expect('zScore' in make({}, {}, found(limit('upper', 6))).result).toBe(false)
    expect('zScore' in make({}, {}, found(limit('upper', 6, { derivation: 'from another' }))).result).toBe(false)
  })
})
