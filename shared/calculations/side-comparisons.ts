import { sideDifferenceId } from '../catalogue/comparisons'
import { techniqueTitle, techniques } from '../catalogue/nerves'
import type { QuantityId } from '../catalogue/quantities'
import type { Technique } from '../catalogue/types'
import { bearingOf, definitionOf } from './comparisons'
import { absentBecause, isNoResponse } from './computed-value'
import type { LimitAsker } from './limit-asker'
import { makeResult, type Owner } from './make-result'
import { quantityInfo } from './quantity-info'
import { cellOf, isLatency } from './runs/run-maker'
import { sideDifference, sideDifferencePercent, sideRatio } from './side-difference'
import type { BySide, KnownRun, StudyContext } from './study-context'
import type { ComparisonAssessment, ComputedValue, Result } from './types'

/** One measure of the sides: what is compared, as which quantity. `limitedOnly`: shown only where a set has a limit. */
interface Measure { of: QuantityId, quantity: string, limitedOnly: boolean, keyEnd: string, label: string }
const always = (of: QuantityId, quantity: string, limitedOnly = false): Measure =>
  ({ of, quantity, limitedOnly, keyEnd: `${quantity}/${of}`, label: `${quantityInfo(of).label}, ${quantityInfo(quantity).label}` })
const whereLimited = (of: QuantityId, quantity: string): Measure => always(of, quantity, true)

const sensoryMeasures = [
  always('onsetLatencyMs', 'sideDifferenceMs'), always('peakLatencyMs', 'sideDifferenceMs'),
  always('amplitudeUv', 'sideDifferencePercent'), whereLimited('amplitudeUv', 'sideDifferenceUv'),
]
const byKind: Partial<Record<Technique['kind'], Measure[]>> = {
  'motor': [
    always('latencyMs', 'sideDifferenceMs'), whereLimited('latencyMs', 'sideDifferencePercent'),
    always('amplitudeMv', 'sideDifferencePercent'), whereLimited('amplitudeMv', 'sideDifferenceMv'),
  ],
  'sensory': sensoryMeasures,
  'mixed': sensoryMeasures,
  'f-wave': [always('minimumLatencyMs', 'sideDifferenceMs')],
  'h-reflex': [always('hLatencyMs', 'sideDifferenceMs'), whereLimited('hAmplitudeMv', 'sideRatio')],
  'blink': [always('r1Ms', 'sideDifferenceMs'), always('r2IpsilateralMs', 'sideDifferenceMs')],
}

/** What the measures of one technique share. */
interface Pair {
  context: StudyContext
  right: KnownRun
  left: KnownRun
  owner: Owner
  asker: LimitAsker
  noLimitBecause: string | undefined
}

const catalogueOrder = new Map(techniques.map((technique, index) => [technique.id, index]))
const placeOf = (known: KnownRun) => catalogueOrder.get(known.run.technique) ?? 0

/** Every technique recorded on both sides, in the order of the catalogue. */
export function compareSides(context: StudyContext): ComparisonAssessment[] {
  const pairs = [...context.standing.values()].filter((one): one is Required<BySide> => one.right !== undefined && one.left !== undefined)
  pairs.sort((a, b) => placeOf(a.right) - placeOf(b.right))
  const made: ComparisonAssessment[] = []
  for (const { right, left } of pairs) {
    const technique = right.technique
    const measures = technique && byKind[technique.kind]
    if (!measures) continue
    const pair = pairOf(context, technique, right, left)
    const results: Result[] = []
    for (const measure of measures) compareCells(pair, measure, results)
    compareVelocities(pair, results)
    if (results.length > 0) made.push({ id: sideDifferenceId(technique.id), title: `${techniqueTitle(technique)}, RIGHT against LEFT`, runIds: [right.run.id, left.run.id], results })
  }
  return made
}

function pairOf(context: StudyContext, technique: Technique, right: KnownRun, left: KnownRun): Pair {
  const id = sideDifferenceId(technique.id)
  const [a, b] = [right, left].map(known => known.usual?.row.values.distanceMm)
  const distanceMm = typeof a === 'number' && a === b ? a : null
  return {
    context, right, left,
    owner: { keyStart: `compare/both/${id}/`, cold: bearingOf([right, left]) },
    asker: context.askerFor({ technique: id, direction: right.run.direction ?? technique.direction ?? null, amplitudeDefinition: definitionOf(right), distanceMm }),
    noLimitBecause: unlikeSides(right, left, technique),
  }
}

/** Sides recorded in two ways are shown beside each other and not judged. */
function unlikeSides(right: KnownRun, left: KnownRun, technique: Technique): string | undefined {
  const [a, b] = [right, left].map(known => known.usual?.row.values.distanceMm)
  if (typeof a === 'number' && typeof b === 'number' && a !== b) return `recorded over ${a} mm and ${b} mm`
  const sameWay = (right.run.direction ?? technique.direction) === (left.run.direction ?? technique.direction) && definitionOf(right) === definitionOf(left)
  return sameWay ? undefined : 'the sides were recorded in two ways'
}

function compareCells(pair: Pair, measure: Measure, results: Result[]): void {
  const [one, other] = [pair.right.usual, pair.left.usual]
  if (!one || !other || one.row.site !== other.row.site) return
  const [right, left] = [one.row.values[measure.of], other.row.values[measure.of]]
  if (right === undefined || left === undefined) return
  if (measure.limitedOnly && pair.asker.ask(measure.quantity, measure.of).kind !== 'limits') return
  const uncertainty = isLatency(measure.of) ? pair.context.expanded.latencyMs : undefined
  const value = between(cellOf(one.row, measure.of, uncertainty), cellOf(other.row, measure.of, uncertainty), measure.quantity)
  if (!value) return
  addSide(pair, results, { quantity: measure.quantity, of: measure.of, keyEnd: measure.keyEnd, label: measure.label, value, formula: `${right} and ${left}` })
}

/** A number from two numbers; "no response" when one side alone has none; nothing otherwise. */
function between(a: ComputedValue, b: ComputedValue, quantity: string): ComputedValue | null {
  if (a.kind === 'value' && b.kind === 'value') {
    if (quantity === 'sideDifferencePercent') return sideDifferencePercent(a.value, b.value)
    return quantity === 'sideRatio' ? sideRatio(a.value, b.value) : sideDifference(a.value, b.value, a.uncertainty, b.uncertainty)
  }
  const oneIsAbsent = (isNoResponse(a) && b.kind === 'value') || (isNoResponse(b) && a.kind === 'value')
  return oneIsAbsent ? absentBecause('no-response') : null
}

function compareVelocities(pair: Pair, results: Result[]): void {
  const { assessed } = pair.context
  const left = assessed.get(pair.left.run.id)?.results.filter(result => result.quantity === 'velocityMps' && result.value.kind === 'value') ?? []
  if (left.length === 0) return
  for (const one of assessed.get(pair.right.run.id)?.results ?? []) {
    if (one.quantity !== 'velocityMps' || one.value.kind !== 'value') continue
    const other = left.find(result => result.at === one.at)
    if (other?.value.kind !== 'value') continue
    addVelocitySide(pair, results, one, other, 'sideDifferenceMps', sideDifference(one.value.value, other.value.value, one.value.uncertainty, other.value.uncertainty))
    if (pair.asker.ask('sideDifferencePercent', 'velocityMps').kind !== 'limits') continue
    addVelocitySide(pair, results, one, other, 'sideDifferencePercent', sideDifferencePercent(one.value.value, other.value.value))
  }
}

function addVelocitySide(pair: Pair, results: Result[], one: Result, other: Result, quantity: string, value: ComputedValue): void {
  addSide(pair, results, {
    quantity, of: 'velocityMps', keyEnd: `${quantity}/velocityMps/${one.at ?? ''}`, label: `${one.label}, side difference`, value,
    formula: `${one.print} and ${other.print} m/s`,
  })
}

const SOURCE = 'Buschbacher (from memory); common practice'

function addSide(pair: Pair, results: Result[], input: { quantity: string, of: string, keyEnd: string, label: string, value: ComputedValue, formula: string }): void {
  results.push(makeResult(pair.context, pair.owner, {
    quantity: input.quantity, keyEnd: input.keyEnd, at: input.of, label: input.label, typed: false, value: input.value,
    how: { formula: input.formula, source: SOURCE }, asker: pair.asker, noLimitBecause: pair.noLimitBecause,
  }))
}
