import { COMBINED_SENSORY_INDEX, comparisons, type Comparison } from '../catalogue/comparisons'
import { techniqueOf } from '../catalogue/nerves'
import type { QuantityId } from '../catalogue/quantities'
import { sides, type Side } from '../schemas/common'
import { combinedSensoryIndex } from './combined-sensory-index'
import { notComputable } from './computed-value'
import { notCold, type ColdBearing } from './judge'
import { latencyDifference } from './latency-difference'
import { makeResult, type Owner } from './make-result'
import { quantityInfo } from './quantity-info'
import { cellOf } from './runs/run-maker'
import { splitHandIndex } from './split-hand-index'
import { standingRun, type KnownRun, type StudyContext } from './study-context'
import { suralRadialRatio } from './sural-radial-ratio'
import type { ComparisonAssessment, ComputedValue, Result } from './types'
import { nerveAndKind, sideWords } from './words'

/** From which typed quantity each difference is made. */
const latencyFor: Record<string, QuantityId> = { onsetDifferenceMs: 'onsetLatencyMs', peakDifferenceMs: 'peakLatencyMs', motorLatencyDifferenceMs: 'latencyMs' }

/** Cold of part of the runs compared is said as such: it can hide a difference as well as make one. */
export function bearingOf(runs: readonly KnownRun[]): ColdBearing {
  const cold = runs.filter(known => known.bearing.state !== 'none')
  const [first] = cold
  if (!first) return notCold
  return { state: cold.length === runs.length ? 'all' : 'part', words: first.bearing.words }
}

const ownerOf = (id: string, side: Side, runs: readonly KnownRun[]): Owner => ({ keyStart: `compare/${side}/${id}/`, side, cold: bearingOf(runs) })

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
  const owner = ownerOf(comparison.id, side, runs)
  const results = comparison.quantities.map(quantity => difference(context, comparison, owner, quantity, first, second))
  return { id: comparison.id, title: `${sideWords[side]} ${comparison.label}`, side, runIds: runs.map(known => known.run.id), results }
}

function difference(context: StudyContext, comparison: Comparison, owner: Owner, quantity: string, first: KnownRun, second: KnownRun | undefined): Result {
  const typed = latencyFor[quantity] ?? 'latencyMs'
  const value = second && first.usual && second.usual
    ? latencyDifference(cellOf(first.usual.row, typed), cellOf(second.usual.row, typed), { latencyMs: context.expanded.latencyMs, nameOfLead: nameOf(comparison.first), nameOfOther: nameOf(comparison.second) })
    : notComputable(`no ${owner.side} ${nameOf(comparison.second)} run`)
  const { label } = quantityInfo(quantity)
  return makeResult(context, owner, {
    quantity, typed: false, value, label: comparison.id === 'median-ulnar-sensory' ? `sensory ${label}` : label, askAt: null,
    how: value.kind === 'value' ? { formula: `${first.usual?.row.values[typed]} ms - ${second?.usual?.row.values[typed]} ms`, source: comparison.source } : undefined,
    asker: context.askerFor({ technique: comparison.id, direction: directionOf(first), amplitudeDefinition: null, distanceMm: distanceOf(first) }),
    noLimitBecause: second && unlike(first, second),
  })
}

const nameOf = (technique: string) => {
  const found = techniqueOf(technique)
  return found ? nerveAndKind(found) : technique
}
const directionOf = ({ run, technique }: KnownRun) => run.direction ?? technique?.direction ?? null
export const definitionOf = ({ run, technique }: KnownRun) => run.amplitudeDefinition ?? technique?.amplitudeDefinition ?? null
const distanceOf = ({ usual }: KnownRun): number | null => {
  const typed = usual?.row.values.distanceMm
  return typeof typed === 'number' ? typed : null
}

/** Latencies over unequal ways, or recorded in opposite directions, are not compared with a limit. */
function unlike(first: KnownRun, second: KnownRun): string | undefined {
  const [a, b] = [distanceOf(first), distanceOf(second)]
  if (a !== null && b !== null && a !== b) return `recorded over ${a} mm and ${b} mm`
  const [directionA, directionB] = [directionOf(first), directionOf(second)]
  return directionA !== directionB ? `recorded ${directionA ?? 'undirected'} and ${directionB ?? 'undirected'}` : undefined
}

function suralRadial(context: StudyContext, comparison: Comparison, side: Side): ComparisonAssessment | null {
  const sural = standingRun(context, comparison.first, side)
  const radial = standingRun(context, comparison.second, side)
  if (!sural || !radial) return null
  const result = makeResult(context, ownerOf(comparison.id, side, [sural, radial]), {
    quantity: 'suralRadialRatio', label: quantityInfo('suralRadialRatio').label, typed: false, askAt: null,
    value: suralRadialRatio(amplitude(sural, 'amplitudeUv'), amplitude(radial, 'amplitudeUv')),
    how: { formula: 'sural amplitude / superficial radial amplitude', source: comparison.source },
    asker: context.askerFor({ technique: comparison.id, direction: directionOf(sural), amplitudeDefinition: definitionOf(sural), distanceMm: distanceOf(sural) }),
    noLimitBecause: definitionOf(sural) === definitionOf(radial) ? undefined : 'the amplitudes are measured in two ways',
  })
  return { id: comparison.id, title: `${sideWords[side]} ${comparison.label}`, side, runIds: [sural.run.id, radial.run.id], results: [result] }
}

const amplitude = ({ usual }: KnownRun, quantity: QuantityId): ComputedValue =>
  usual ? cellOf(usual.row, quantity) : notComputable('nothing recorded')

const indexParts = ['median-ulnar-palm', 'median-ulnar-ring', 'median-radial-thumb'] as const

/** Made as soon as two of its three differences were begun; one alone is no attempt at the index. */
function combinedIndex(context: StudyContext, made: readonly ComparisonAssessment[], side: Side): ComparisonAssessment | null {
  const parts = indexParts.map(id => made.find(one => one.id === id && one.side === side))
  if (parts.filter(part => part !== undefined).length < 2) return null
  const [palm, ring, thumb] = parts.map(part => part?.results.find(result => result.quantity === 'peakDifferenceMs')?.value ?? notComputable('not recorded'))
  const runIds = [...new Set(parts.flatMap(part => part?.runIds ?? []))]
  const runs = runIds.map(id => context.known.get(id)).filter(known => known !== undefined)
  const result = makeResult(context, ownerOf(COMBINED_SENSORY_INDEX, side, runs), {
    quantity: 'combinedIndexMs', label: quantityInfo('combinedIndexMs').label, typed: false, askAt: null,
    value: combinedSensoryIndex({ palm: palm as ComputedValue, ring: ring as ComputedValue, thumb: thumb as ComputedValue }, context.expanded.latencyMs),
    how: { formula: 'palm + ring finger + thumb difference of peak latency', source: 'Robinson et al., Muscle Nerve 1998;21:1166-1171; Lew et al., Muscle Nerve 2000;23:1261-1264' },
    asker: context.askerFor({ technique: COMBINED_SENSORY_INDEX, direction: null, amplitudeDefinition: null, distanceMm: null }),
  })
  return { id: COMBINED_SENSORY_INDEX, title: `${sideWords[side]} combined sensory index`, side, runIds, results: [result] }
}

/** Made only where all three muscles were recorded: without the first dorsal interosseous nobody asked for the index. */
function splitHand(context: StudyContext, side: Side): ComparisonAssessment | null {
  const apb = standingRun(context, 'median-motor-apb', side)
  const fdi = standingRun(context, 'ulnar-motor-fdi', side)
  const adm = standingRun(context, 'ulnar-motor-adm', side)
  if (!apb || !fdi || !adm) return null
  const result = makeResult(context, ownerOf('split-hand', side, [apb, fdi, adm]), {
    quantity: 'splitHandIndex', label: quantityInfo('splitHandIndex').label, typed: false, supporting: true, askAt: null,
    value: splitHandIndex({ apb: amplitude(apb, 'amplitudeMv'), fdi: amplitude(fdi, 'amplitudeMv'), adm: amplitude(adm, 'amplitudeMv') }),
    how: { formula: 'APB x FDI / ADM amplitude', source: 'Neurol Int 2022;14:707-715' },
    asker: context.askerFor({ technique: 'split-hand', direction: null, amplitudeDefinition: null, distanceMm: null }),
  })
  return { id: 'split-hand', title: `${sideWords[side]} split-hand index`, side, runIds: [apb, fdi, adm].map(known => known.run.id), results: [result] }
}
