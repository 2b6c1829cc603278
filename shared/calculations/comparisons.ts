import { COMBINED_SENSORY_INDEX, comparisons, type Comparison } from '../catalogue/comparisons'
import type { QuantityId } from '../catalogue/quantities'
import { sides, type Side } from '../schemas/common'
import { techniqueOf } from '../catalogue/nerves'
import { combinedSensoryIndex } from './combined-sensory-index'
import { notComputable } from './computed-value'
import { notCold, type ColdBearing } from './judge'
import { latencyDifference } from './latency-difference'
import { makeResult } from './make-result'
import { quantityInfo } from './quantity-info'
import { cellOf, placedRows, type PlacedRow } from './runs/run-maker'
import { splitHandIndex } from './split-hand-index'
import { standingRun, type KnownRun, type StudyContext } from './study-context'
import { suralRadialRatio } from './sural-radial-ratio'
import type { ComparisonAssessment, ComputedValue, Result } from './types'
import { nerveAndKind, sideWords } from './words'

/** From which typed quantity each difference is made. */
const latencyFor: Record<string, QuantityId> = { onsetDifferenceMs: 'onsetLatencyMs', peakDifferenceMs: 'peakLatencyMs', motorLatencyDifferenceMs: 'latencyMs' }

/** The row of the usual (distal) site of a run: what comparisons and side differences use. */
export function usualRow(known: KnownRun): PlacedRow | undefined {
  if (!known.technique) return undefined
  const rows = placedRows(known.run, known.technique)
  const usual = known.technique.sites.find(site => site.usual)?.id
  return rows.find(placed => placed.row.site === usual) ?? rows[0]
}

/** Cold of part of the runs compared is said as such: it can hide a difference as well as make one. */
export function bearingOf(runs: readonly KnownRun[]): ColdBearing {
  const cold = runs.filter(known => known.bearing.state !== 'none')
  const [first] = cold
  if (!first) return notCold
  return { state: cold.length === runs.length ? 'all' : 'part', words: first.bearing.words }
}

/**
 * Every comparison within one limb that the study allows, right before left. A comparison of latencies is made as soon
 * as its first nerve was recorded; a missing second one is the reason why there is no number.
 */
export function compareWithinLimbs(context: StudyContext): ComparisonAssessment[] {
  const made: ComparisonAssessment[] = []
  for (const side of sides) {
    for (const comparison of comparisons) {
      const one = comparison.quantities[0] === 'suralRadialRatio' ? suralRadial(context, comparison, side) : latencies(context, comparison, side)
      if (one) made.push(one)
    }
    const index = combinedIndex(context, made, side)
    if (index) made.push(index)
    const hand = splitHand(context, side)
    if (hand) made.push(hand)
  }
  return made
}

function latencies(context: StudyContext, comparison: Comparison, side: Side): ComparisonAssessment | null {
  const first = standingRun(context, comparison.first, side)
  const second = standingRun(context, comparison.second, side)
  if (!first) return null
  // Two skin nerves of the forearm are compared only where both were recorded.
  if (!second && comparison.id === 'antebrachial') return null
  const runs = second ? [first, second] : [first]
  const results = comparison.quantities.map(quantity => difference(context, comparison, side, quantity, first, second))
  return { id: comparison.id, title: `${sideWords[side]} ${comparison.label}`, side, runIds: runs.map(known => known.run.id), results }
}

function difference(context: StudyContext, comparison: Comparison, side: Side, quantity: string, first: KnownRun, second: KnownRun | undefined): Result {
  const typed = latencyFor[quantity] ?? 'latencyMs'
  const rows = [usualRow(first), second && usualRow(second)] as const
  const value = second && rows[0] && rows[1]
    ? latencyDifference(cellOf(rows[0].row, typed), cellOf(rows[1].row, typed), { latencyMs: context.expanded.latencyMs, nameOfLead: nameOf(comparison.first), nameOfOther: nameOf(comparison.second) })
    : notComputable(`no ${side} ${nameOf(comparison.second)} run`)
  return makeResult(context, {
    key: `compare/${side}/${comparison.id}/${quantity}`, side, quantity, typed: false, value,
    label: comparison.id === 'median-ulnar-sensory' ? `sensory ${quantityInfo(quantity).label}` : quantityInfo(quantity).label,
    how: value.kind === 'value' ? { formula: `${rows[0]?.row.values[typed]} ms - ${rows[1]?.row.values[typed]} ms`, source: comparison.source } : undefined,
    query: { technique: comparison.id, at: null, direction: directionOf(first), amplitudeDefinition: null, distanceMm: distanceOf(rows[0]) },
    noLimitBecause: second && unlike(rows[0], rows[1], first, second),
    cold: bearingOf(second ? [first, second] : [first]),
  })
}

const nameOf = (technique: string) => {
  const found = techniqueOf(technique)
  return found ? nerveAndKind(found) : technique
}
const directionOf = ({ run, technique }: KnownRun) => run.direction ?? technique?.direction ?? null
const distanceOf = (placed: PlacedRow | undefined): number | null => {
  const typed = placed?.row.values.distanceMm
  return typeof typed === 'number' ? typed : null
}

/** Latencies over unequal ways, or recorded in opposite directions, are not compared with a limit. */
function unlike(one: PlacedRow | undefined, other: PlacedRow | undefined, first: KnownRun, second: KnownRun): string | undefined {
  const [a, b] = [distanceOf(one), distanceOf(other)]
  if (a !== null && b !== null && a !== b) return `recorded over ${a} mm and ${b} mm`
  const [directionA, directionB] = [directionOf(first), directionOf(second)]
  return directionA !== directionB ? `recorded ${directionA ?? 'undirected'} and ${directionB ?? 'undirected'}` : undefined
}

function suralRadial(context: StudyContext, comparison: Comparison, side: Side): ComparisonAssessment | null {
  const sural = standingRun(context, comparison.first, side)
  const radial = standingRun(context, comparison.second, side)
  if (!sural || !radial) return null
  const rows = [usualRow(sural), usualRow(radial)] as const
  const value = suralRadialRatio(amplitude(rows[0], 'amplitudeUv'), amplitude(rows[1], 'amplitudeUv'))
  const definitions = [sural, radial].map(({ run, technique }) => run.amplitudeDefinition ?? technique?.amplitudeDefinition)
  const result = makeResult(context, {
    key: `compare/${side}/${comparison.id}/suralRadialRatio`, side, quantity: 'suralRadialRatio', label: quantityInfo('suralRadialRatio').label, typed: false, value,
    how: { formula: 'sural amplitude / superficial radial amplitude', source: comparison.source },
    query: { technique: comparison.id, at: null, direction: directionOf(sural), amplitudeDefinition: sural.run.amplitudeDefinition ?? sural.technique?.amplitudeDefinition ?? null, distanceMm: distanceOf(rows[0]) },
    noLimitBecause: definitions[0] === definitions[1] ? undefined : 'the amplitudes are measured in two ways',
    cold: bearingOf([sural, radial]),
  })
  return { id: comparison.id, title: `${sideWords[side]} ${comparison.label}`, side, runIds: [sural.run.id, radial.run.id], results: [result] }
}

const amplitude = (placed: PlacedRow | undefined, quantity: QuantityId): ComputedValue =>
  placed ? cellOf(placed.row, quantity) : notComputable('nothing recorded')

const indexParts = ['median-ulnar-palm', 'median-ulnar-ring', 'median-radial-thumb'] as const

/** Made as soon as two of its three differences were begun; one alone is no attempt at the index. */
function combinedIndex(context: StudyContext, made: readonly ComparisonAssessment[], side: Side): ComparisonAssessment | null {
  const parts = indexParts.map(id => made.find(one => one.id === id && one.side === side))
  if (parts.filter(part => part !== undefined).length < 2) return null
  const [palm, ring, thumb] = parts.map(part => part?.results.find(result => result.quantity === 'peakDifferenceMs')?.value ?? notComputable('not recorded'))
  const runIds = [...new Set(parts.flatMap(part => part?.runIds ?? []))]
  const value = combinedSensoryIndex({ palm: palm as ComputedValue, ring: ring as ComputedValue, thumb: thumb as ComputedValue }, context.expanded.latencyMs)
  const result = makeResult(context, {
    key: `compare/${side}/${COMBINED_SENSORY_INDEX}/combinedIndexMs`, side, quantity: 'combinedIndexMs', label: quantityInfo('combinedIndexMs').label, typed: false, value,
    how: { formula: 'palm + ring finger + thumb difference of peak latency', source: 'Robinson et al., Muscle Nerve 1998;21:1166-1171; Lew et al., Muscle Nerve 2000;23:1261-1264' },
    query: { technique: COMBINED_SENSORY_INDEX, at: null, direction: null, amplitudeDefinition: null, distanceMm: null },
    cold: bearingOf(runIds.map(id => context.known.get(id)).filter(known => known !== undefined)),
  })
  return { id: COMBINED_SENSORY_INDEX, title: `${sideWords[side]} combined sensory index`, side, runIds, results: [result] }
}

/** Made only where the first dorsal interosseous was recorded: without it nobody asked for the index. */
function splitHand(context: StudyContext, side: Side): ComparisonAssessment | null {
  const runs = (['median-motor-apb', 'ulnar-motor-fdi', 'ulnar-motor-adm'] as const).map(id => standingRun(context, id, side))
  const [apb, fdi, adm] = runs
  if (!apb || !fdi || !adm) return null
  const of = (known: KnownRun) => amplitude(usualRow(known), 'amplitudeMv')
  const result = makeResult(context, {
    key: `compare/${side}/split-hand/splitHandIndex`, side, quantity: 'splitHandIndex', label: quantityInfo('splitHandIndex').label, typed: false,
    value: splitHandIndex({ apb: of(apb), fdi: of(fdi), adm: of(adm) }),
    how: { formula: 'APB x FDI / ADM amplitude', source: 'Neurol Int 2022;14:707-715' }, supporting: true,
    query: { technique: 'split-hand', at: null, direction: null, amplitudeDefinition: null, distanceMm: null },
    cold: bearingOf([apb, fdi, adm]),
  })
  return { id: 'split-hand', title: `${sideWords[side]} split-hand index`, side, runIds: [apb, fdi, adm].map(known => known.run.id), results: [result] }
}
