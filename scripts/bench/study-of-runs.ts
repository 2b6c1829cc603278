import { techniques } from '#shared/catalogue/nerves'
import type { Technique } from '#shared/catalogue/types'
import { usualSettings, usualSites } from '#server/services/lay-out-runs'
import type { Side } from '#shared/schemas/common'
import { studySchema, type Entry, type Run, type Study } from '#shared/schemas/study'

/** Invented values of a size that is usual; `shift` makes each study another one, as a keystroke does. */
function valuesOf(technique: Technique, row: number, shift: number): Record<string, Entry> {
  const distal = technique.standardDistanceMm ?? 80
  if (technique.kind === 'motor') return { latencyMs: tenth(3.4 + row * 4 + shift), amplitudeMv: tenth(8 - row * 0.3), durationMs: 5.6, distanceMm: row === 0 ? distal : 210 }
  if (technique.kind === 'f-wave') return { minimumLatencyMs: tenth(28 + shift), stimulusCount: 10, responseCount: 9 }
  return { onsetLatencyMs: tenth(2.8 + shift), peakLatencyMs: tenth(3.5 + shift), amplitudeUv: 18, distanceMm: technique.standardDistanceMm ?? 140 }
}
const tenth = (value: number) => Math.round(value * 10) / 10

function runOf(technique: Technique, side: Side, shift: number): Run {
  const id = `${side}-${technique.id}`
  return { id, technique: technique.id, side, ...usualSettings(technique), rows: usualSites(technique).map((site, row) => ({ id: `${id}-${row}`, site, values: valuesOf(technique, row, shift) })) }
}

const studied = techniques.filter(technique => ['motor', 'sensory', 'mixed', 'f-wave'].includes(technique.kind) && technique.limb !== 'face')
const both: [Technique, Side][] = (['motor', 'sensory', 'f-wave', 'mixed'] as const).flatMap(kind => studied.filter(technique => technique.kind === kind).flatMap(technique => [[technique, 'right'], [technique, 'left']] as [Technique, Side][]))
/** Kinds mixed as in a real study: every third run is of another kind, both sides together. */
const order = both.map((pair, index) => ({ pair, at: ((index >> 1) * 7) % (both.length >> 1) * 2 + (index & 1) })).toSorted((a, b) => a.at - b.at).map(({ pair }) => pair)

/**
 * A study of so many runs of an invented woman, both sides of each technique.
 * @param turn any number; another one gives other values
 */
export function studyOfRuns(count: number, turn = 0): Study {
  const shift = turn % 20 / 10
  if (count > order.length) throw new Error(`There are ${order.length} runs to choose from.`)
  return studySchema.parse({
    id: `bench-${count}-${turn}`, studyDate: '2026-12-02', patient: { birthDate: '1974-03-14', sexForLimits: 'female' }, heightCm: 162, weightKg: 74, referralSide: 'both',
    temperatures: (['hand', 'foot'] as const).flatMap(segment => (['right', 'left'] as const).map(side => ({ id: `${segment}-${side}`, segment, side, celsius: 33, warmed: false }))),
    runs: order.slice(0, count).map(([technique, side]) => runOf(technique, side, shift)),
  })
}
