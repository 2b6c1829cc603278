import { assessStudy } from '#shared/calculations/assess-study'
import { patternSets } from '#shared/calculations/patterns'
import { defaultPolicy, type PatternResult, type Policy } from '#shared/calculations/types'
import type { Side } from '#shared/schemas/common'
import type { LimitRow, ReferenceTable } from '#shared/schemas/reference-table'
import type { Entry, Run, RunRow, Study } from '#shared/schemas/study'
import { adopt, limitRow, tableOf } from '../limit-fixtures'
import { run, studyWith } from '../study-maker'

/** Studies of nobody and invented sets of limits, for the published criteria. */
export type Limit = [technique: string, quantity: string, at: string | null, bound: 'upper' | 'lower', value: number, more?: Partial<LimitRow>]

/** Reading a table is slow beside assessing a study: each list of limits is read once. */
const read = new WeakMap<readonly Limit[], ReferenceTable>()

export function limitsTable(limits: readonly Limit[]): ReferenceTable {
  const known = read.get(limits)
  if (known) return known
  const table = tableOf(limits.map(([technique, quantity, at, bound, value, more], index) =>
    limitRow({ id: `row-${index}`, technique, quantity, at, bound, value, unit: '', distanceMm: null, direction: null, amplitudeDefinition: null, percentile: bound === 'upper' ? 97 : 3, ...more })))
  read.set(limits, table)
  return table
}

export interface Given { limits?: readonly Limit[], policy?: Partial<Policy>, study?: Partial<Study> }

/** The patterns of these runs; every set is on unless the policy says otherwise. */
export function patternsOf(runs: Run[], { limits = [], policy = {}, study = {} }: Given = {}): PatternResult[] {
  const tables = limits.length > 0 ? [limitsTable(limits)] : []
  const all: Policy = { ...defaultPolicy, patternsOn: patternSets.map(({ id }) => id), adopted: tables.map(table => adopt(table)), ...policy }
  return assessStudy(studyWith(runs, study), tables, all).patterns
}

export function pick(patterns: readonly PatternResult[], id: string, side?: Side): PatternResult {
  const found = patterns.find(one => one.id === id && one.side === side)
  if (!found) throw new Error(`no ${id} ${side ?? ''} among ${patterns.map(one => `${one.id} ${one.side ?? ''}`).join(', ')}`)
  return found
}
/** One pattern alone: the other sets are off. */
export const patternOf = (id: string, runs: Run[], given: Given = {}, side?: Side): PatternResult => pick(patternsOf(runs, { ...given, policy: { patternsOff: patternSets.map(one => one.id).filter(one => one !== id), ...given.policy } }), id, side)

export const has = (patterns: readonly PatternResult[], id: string, side?: Side): boolean => patterns.some(one => one.id === id && one.side === side)
export const outcome = ({ outcome: { met, label } }: PatternResult): string => `${met}: ${label}`

export function criterionOf(pattern: PatternResult, id: string): PatternResult['criteria'][number] {
  const found = pattern.criteria.find(one => one.id === id)
  if (!found) throw new Error(`no ${id} among ${pattern.criteria.map(one => one.id).join(', ')}`)
  return found
}
/** "met: 5.2 ms, limit 4.4 ms [because]". */
export function said(pattern: PatternResult, id: string): string {
  const { result, numbers, because } = criterionOf(pattern, id)
  return `${result}: ${numbers}${because ? ` [${because}]` : ''}`
}
/** The whole check list: its outcome, then each criterion as "id: met: 5.2 ms, limit 4.4 ms [because]". */
export const sheet = (pattern: PatternResult): string[] => [outcome(pattern), ...pattern.criteria.map(({ id }) => `${id}: ${said(pattern, id)}`)]
export const truths = (pattern: PatternResult): Record<string, string> => Object.fromEntries(pattern.criteria.map(one => [one.id, one.result]))

const motors = {
  median: { technique: 'median-motor-apb', wave: 'median-f-apb', distal: 'wrist', proximal: 'elbow', segment: 'forearm', mm: 80, way: 220 },
  ulnar: { technique: 'ulnar-motor-adm', wave: 'ulnar-f-adm', distal: 'wrist', proximal: 'below-elbow', segment: 'forearm', mm: 80, way: 220 },
  fibular: { technique: 'fibular-motor-edb', wave: 'fibular-f-edb', distal: 'ankle', proximal: 'below-fibular-head', segment: 'leg', mm: 80, way: 320 },
  tibial: { technique: 'tibial-motor-ah', wave: 'tibial-f-ah', distal: 'ankle', proximal: 'popliteal-fossa', segment: 'leg', mm: 80, way: 400 },
} as const
export type Motor = keyof typeof motors

/** The card of Dimachkie, Barohn and Katz, Neurol Clin 2013;31:533-555: limits in ms, m/s and mV. */
const card: Record<Motor, { velocity: number, latency: number, f: number, amplitude: number }> = {
  median: { velocity: 49, latency: 4.5, f: 31, amplitude: 4.5 },
  ulnar: { velocity: 50, latency: 3.6, f: 32, amplitude: 5 },
  fibular: { velocity: 41, latency: 6.6, f: 58, amplitude: 2 },
  tibial: { velocity: 41, latency: 6, f: 58, amplitude: 4 },
}
export const cardLimits: readonly Limit[] = (Object.keys(card) as Motor[]).flatMap((nerve): Limit[] => {
  const { technique, wave, distal, segment } = motors[nerve]
  const { velocity, latency, f, amplitude } = card[nerve]
  return [
    [technique, 'latencyMs', distal, 'upper', latency], [technique, 'velocityMps', segment, 'lower', velocity],
    [technique, 'amplitudeMv', distal, 'lower', amplitude], [wave, 'minimumLatencyMs', null, 'upper', f],
  ]
})

export interface NerveNumbers {
  dml?: Entry
  mcv?: number
  amp?: Entry
  f?: Entry
  /** At the proximal site. */
  proximalAmp?: Entry
  duration?: number
  proximalDuration?: number
  area?: number
  proximalArea?: Entry
  filterHz?: number
}

/** Motor run, and F-wave run where there is one, of one nerve. The velocity comes from the latencies. */
export function motorNerve(nerve: Motor, side: Side, numbers: NerveNumbers): Run[] {
  const { technique, wave, distal, proximal, mm, way } = motors[nerve]
  const { dml = 3, mcv, f, filterHz } = numbers
  const rows: [string, RunRow['values']][] = [[distal, valuesOf({ latencyMs: dml, amplitudeMv: numbers.amp, durationMs: numbers.duration, areaMvMs: numbers.area, distanceMm: mm })]]
  const hasProximal = [mcv, numbers.proximalAmp, numbers.proximalArea, numbers.proximalDuration].some(one => one !== undefined)
  const latencyMs = mcv === undefined || typeof dml !== 'number' ? undefined : dml + way / mcv
  if (hasProximal) rows.push([proximal, valuesOf({ latencyMs, amplitudeMv: numbers.proximalAmp, durationMs: numbers.proximalDuration, areaMvMs: numbers.proximalArea, distanceMm: way })])
  const motor = run(technique, side, rows, filterHz === undefined ? {} : { lowFrequencyFilterHz: filterHz })
  return f === undefined ? [motor] : [motor, run(wave, side, [[distal, { minimumLatencyMs: f, stimulusCount: 10, responseCount: f === 'no-response' ? 0 : 10 }]])]
}

function valuesOf(values: Record<string, Entry | undefined>): RunRow['values'] {
  return Object.fromEntries(Object.entries(values).filter(([, value]) => value !== undefined)) as RunRow['values']
}

/** A sensory run at its usual site over its usual way. */
export function sensory(technique: string, side: Side, values: { onset?: Entry, peak?: Entry, amplitude?: Entry }, mm = 140, more: Partial<Run> = {}): Run {
  const sites: Record<string, string> = { 'sural': 'calf', 'superficial-fibular': 'lower-leg', 'radial-sensory-snuffbox': 'forearm', 'median-mixed-palm': 'palm', 'ulnar-mixed-palm': 'palm' }
  return run(technique, side, [[sites[technique] ?? 'wrist', valuesOf({ onsetLatencyMs: values.onset, peakLatencyMs: values.peak, amplitudeUv: values.amplitude, distanceMm: mm })]], more)
}
