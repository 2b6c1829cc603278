import { notComputable, valueOf } from './computed-value'
import { TOLERANCE } from './tolerance'
import type { Assessment, ComputedValue, EarlierChange, EarlierStudy, Result, RunAssessment } from './types'

const SOURCE = 'Twice the coefficient of variation between sessions: 4.2 to 9.8 % for latencies, velocities and F latencies, 15.6 to 19.8 % for amplitudes (PMC2777171, read); rounded up to 10 and 40 % (derived)'

/** Change that repeated measurement alone can make, in per cent, by the unit of the quantity. */
const bands: Record<string, number> = { 'ms': 10, 'm/s': 10, 'mV': 40, 'µV': 40 }
/** Numbers that are followed from study to study. */
const followed = new Set(['latencyMs', 'amplitudeMv', 'velocityMps', 'onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'minimumLatencyMs', 'hLatencyMs', 'r1Ms', 'r2IpsilateralMs', 'r2ContralateralMs'])

/**
 * Change from an earlier to a present value, in per cent of the earlier one.
 *
 * change = 100 x (now - then) / then. Source: arithmetic.
 *
 * @example
 * changePercent(4.8, 7.7) // => { kind: 'value', value: -37.66… } (%)
 */
export function changePercent(now: number, then: number): ComputedValue {
  return then > 0 ? valueOf(100 * (now - then) / then) : notComputable('the earlier value is not above 0')
}

/**
 * Does a change go beyond what repeated measurement alone makes? Exactly at the band is not beyond.
 *
 * @example
 * beyondBand({ kind: 'value', value: -37.7 }, 40) // => 'no'
 */
export function beyondBand(change: ComputedValue, bandPercent: number | null): EarlierChange['beyondBand'] {
  if (change.kind !== 'value' || bandPercent === null) return 'not-known'
  return Math.abs(change.value) > bandPercent + TOLERANCE ? 'yes' : 'no'
}

/** The published band for a unit, or null. */
export const bandFor = (unit: string): number | null => bands[unit] ?? null

interface Where { siteName?: string, technologist?: string }

/**
 * Every number of this study beside the same number of each earlier one: same technique, side, quantity and place.
 * Superseded runs and runs in doubt stand back; what differs otherwise (site, technologist, cold limb) is said.
 */
export function compareWithEarlier(now: Pick<Assessment, 'runs'>, earlier: readonly EarlierStudy[], where: Where = {}): EarlierChange[] {
  const present = now.runs.flatMap(run => followedResults(run))
  return earlier.flatMap((study) => {
    const before = new Map(study.assessment.runs.flatMap(run => followedResults(run)).map(one => [one.place, one]))
    return present.flatMap(({ result, run, place }) => {
      const then = before.get(place)
      return then ? [changeOf(result, run, then.result, then.run, study, where)] : []
    })
  })
}

interface Placed { place: string, result: Result, run: RunAssessment }

function followedResults(run: RunAssessment): Placed[] {
  if (run.supersededBy !== undefined) return []
  return run.results.filter(result => followed.has(result.quantity) && result.value.kind !== 'not-computable')
    .map(result => ({ place: `${run.technique}/${run.side}/${result.quantity}/${result.label}`, result, run }))
}

function changeOf(now: Result, run: RunAssessment, then: Result, runThen: RunAssessment, study: EarlierStudy, where: Where): EarlierChange {
  const change = now.value.kind === 'value' && then.value.kind === 'value'
    ? changePercent(now.value.value, then.value.value)
    : notComputable('not two numbers')
  const bandPercent = bandFor(now.unit)
  return {
    key: `earlier/${study.studyId}/${now.key}`, resultKey: now.key, runId: now.runId ?? run.runId, side: run.side,
    studyId: study.studyId, studyDate: study.studyDate, quantity: now.quantity, label: now.label, unit: now.unit,
    print: now.print, printEarlier: then.print, changePercent: change, bandPercent, beyondBand: beyondBand(change, bandPercent),
    remarks: remarksOn(now, run, then, runThen, study, where), source: SOURCE,
  }
}

function remarksOn(now: Result, run: RunAssessment, then: Result, runThen: RunAssessment, study: EarlierStudy, where: Where): string[] {
  const isCold = (one: RunAssessment) => one.cold.state === 'cold' || one.cold.state === 'unknown'
  const remarks = [
    now.value.kind === 'value' && then.value.kind === 'absent' ? 'a response where there was none' : '',
    now.value.kind === 'absent' && then.value.kind === 'value' ? `${now.print} where there was a response` : '',
    where.siteName !== undefined && where.siteName !== study.siteName ? `recorded at ${study.siteName} then` : '',
    where.technologist !== undefined && where.technologist !== study.technologist ? `recorded by ${study.technologist} then` : '',
    isCold(run) ? 'limb cold now' : '',
    isCold(runThen) ? 'limb cold then' : '',
  ]
  return remarks.filter(Boolean)
}
