import { sideDifferenceId } from '../catalogue/comparisons'
import { nerveLabels, techniqueTitle, techniques } from '../catalogue/nerves'
import type { QuantityId } from '../catalogue/quantities'
import type { Technique } from '../catalogue/types'
import { bearingOf, usualRow } from './comparisons'
import { absentBecause, isNoResponse } from './computed-value'
import { makeResult } from './make-result'
import { quantityInfo } from './quantity-info'
import { cellOf, isLatency } from './runs/run-maker'
import { sideDifference, sideDifferencePercent, sideRatio } from './side-difference'
import { standingRun, type KnownRun, type StudyContext } from './study-context'
import type { ComparisonAssessment, ComputedValue, Result } from './types'

/** One measure of the sides: what is compared, as which quantity. `limitedOnly`: shown only where a set has a limit. */
interface Measure { of: QuantityId, quantity: string, limitedOnly?: boolean }

const byKind: Partial<Record<Technique['kind'], Measure[]>> = {
  'motor': [
    { of: 'latencyMs', quantity: 'sideDifferenceMs' },
    { of: 'amplitudeMv', quantity: 'sideDifferencePercent' },
    { of: 'amplitudeMv', quantity: 'sideDifferenceMv', limitedOnly: true },
  ],
  'sensory': [
    { of: 'onsetLatencyMs', quantity: 'sideDifferenceMs' },
    { of: 'peakLatencyMs', quantity: 'sideDifferenceMs' },
    { of: 'amplitudeUv', quantity: 'sideDifferencePercent' },
    { of: 'amplitudeUv', quantity: 'sideDifferenceUv', limitedOnly: true },
  ],
  'f-wave': [{ of: 'minimumLatencyMs', quantity: 'sideDifferenceMs' }],
  'h-reflex': [
    { of: 'hLatencyMs', quantity: 'sideDifferenceMs' },
    { of: 'hAmplitudeMv', quantity: 'sideRatio', limitedOnly: true },
  ],
  'blink': [
    { of: 'r1Ms', quantity: 'sideDifferenceMs' },
    { of: 'r2IpsilateralMs', quantity: 'sideDifferenceMs' },
  ],
}
byKind.mixed = byKind.sensory

/** Every technique recorded on both sides, in the order of the catalogue. */
export function compareSides(context: StudyContext): ComparisonAssessment[] {
  const made: ComparisonAssessment[] = []
  for (const technique of techniques) {
    const measures = byKind[technique.kind]
    if (!measures) continue
    const right = standingRun(context, technique.id, 'right')
    const left = standingRun(context, technique.id, 'left')
    if (!right || !left) continue
    const results = [...measures.flatMap(measure => compareCells(context, technique, right, left, measure)), ...compareVelocities(context, technique, right, left)]
    if (results.length > 0) made.push({ id: sideDifferenceId(technique.id), title: `${techniqueTitle(technique)}, RIGHT against LEFT`, runIds: [right.run.id, left.run.id], results })
  }
  return made
}

function compareCells(context: StudyContext, technique: Technique, right: KnownRun, left: KnownRun, measure: Measure): Result[] {
  const rows = [usualRow(right), usualRow(left)]
  const uncertainty = isLatency(measure.of) ? context.expanded.latencyMs : undefined
  const [a, b] = rows.map(placed => placed && cellOf(placed.row, measure.of, uncertainty))
  const value = a && b && between(a, b, measure.quantity)
  const same = rows[0]?.row.site === rows[1]?.row.site
  if (!value || !same) return []
  return side(context, technique, right, left, { ...measure, at: measure.of, label: `${quantityInfo(measure.of).label}, ${quantityInfo(measure.quantity).label}`, value, keyEnd: measure.of, how: `${said(a)} and ${said(b)}` })
}

const said = (value: ComputedValue) => value.kind === 'value' ? String(value.value) : value.kind

/** A number from two numbers; "no response" when one side alone has none; nothing otherwise. */
function between(a: ComputedValue, b: ComputedValue, quantity: string): ComputedValue | null {
  if (a.kind === 'value' && b.kind === 'value') {
    if (quantity === 'sideDifferencePercent') return sideDifferencePercent(a.value, b.value)
    return quantity === 'sideRatio' ? sideRatio(a.value, b.value) : sideDifference(a.value, b.value, a.uncertainty, b.uncertainty)
  }
  const oneIsAbsent = (isNoResponse(a) && b.kind === 'value') || (isNoResponse(b) && a.kind === 'value')
  return oneIsAbsent ? absentBecause('no-response') : null
}

function compareVelocities(context: StudyContext, technique: Technique, right: KnownRun, left: KnownRun): Result[] {
  const [ofRight, ofLeft] = [right, left].map(known => context.assessed.get(known.run.id)?.results ?? [])
  return (ofRight ?? []).filter(result => result.quantity === 'velocityMps').flatMap((result) => {
    const other = ofLeft?.find(one => one.quantity === 'velocityMps' && one.at === result.at)
    if (!other || result.value.kind !== 'value' || other.value.kind !== 'value') return []
    const how = `${result.print} and ${other.print} m/s`
    const common = { at: 'velocityMps', keyEnd: `velocityMps/${result.at ?? ''}`, label: `${result.label}, side difference`, how }
    return [
      ...side(context, technique, right, left, { ...common, quantity: 'sideDifferenceMps', value: sideDifference(result.value.value, other.value.value, result.value.uncertainty, other.value.uncertainty) }),
      ...side(context, technique, right, left, { ...common, quantity: 'sideDifferencePercent', value: sideDifferencePercent(result.value.value, other.value.value), limitedOnly: true }),
    ]
  })
}

interface SideInput { quantity: string, at: string, keyEnd: string, label: string, value: ComputedValue, how: string, limitedOnly?: boolean }

function side(context: StudyContext, technique: Technique, right: KnownRun, left: KnownRun, input: SideInput): Result[] {
  const id = sideDifferenceId(technique.id)
  const query = {
    technique: id, at: input.at, distanceMm: sharedDistance(right, left),
    direction: right.run.direction ?? technique.direction ?? null,
    amplitudeDefinition: right.run.amplitudeDefinition ?? technique.amplitudeDefinition ?? null,
  }
  if (input.limitedOnly && context.limits({ ...query, quantity: input.quantity }).kind !== 'limits') return []
  return [makeResult(context, {
    key: `compare/both/${id}/${input.quantity}/${input.keyEnd}`, quantity: input.quantity, at: input.at, label: input.label, typed: false, value: input.value,
    how: { formula: input.how, source: 'Buschbacher (from memory); common practice' }, query, noLimitBecause: unlikeSides(right, left, technique), cold: bearingOf([right, left]),
  })]
}

function sharedDistance(right: KnownRun, left: KnownRun): number | null {
  const [a, b] = [right, left].map(known => usualRow(known)?.row.values.distanceMm)
  return typeof a === 'number' && a === b ? a : null
}

/** Sides recorded in two ways are shown beside each other and not judged. */
function unlikeSides(right: KnownRun, left: KnownRun, technique: Technique): string | undefined {
  const [a, b] = [right, left].map(known => usualRow(known)?.row.values.distanceMm)
  if (typeof a === 'number' && typeof b === 'number' && a !== b) return `the ${nerveLabels[technique.nerve] ?? technique.nerve} nerve was recorded over ${a} mm and ${b} mm`
  const way = (known: KnownRun) => `${known.run.direction ?? technique.direction}/${known.run.amplitudeDefinition ?? technique.amplitudeDefinition}`
  return way(right) === way(left) ? undefined : 'the sides were recorded in two ways'
}
