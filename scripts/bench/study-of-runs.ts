import { createHash } from 'node:crypto'
import { techniqueOf } from '#shared/catalogue/nerves'
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

/** As the database gives them: the length of an id is part of what a copy costs. */
const idOf = (text: string) => createHash('sha256').update(text).digest('hex').replace(/^(.{8})(.{4})(.{4})(.{4})(.{12}).*$/, '$1-$2-$3-$4-$5')

function runOf(id: string, side: Side, shift: number): Run {
  const technique = techniqueOf(id)
  if (!technique) throw new Error(`There is no technique ${id}.`)
  return { id: idOf(`${side}/${id}`), technique: id, side, ...usualSettings(technique), rows: usualSites(technique).map((site, row) => ({ id: idOf(`${side}/${id}/${row}`), site, values: valuesOf(technique, row, shift) })) }
}

/** What is done most stands first; any beginning of the list holds every kind. */
const order = [
  'median-motor-apb', 'median-sensory-d2', 'ulnar-motor-adm', 'ulnar-sensory-d5', 'median-f-apb',
  'tibial-motor-ah', 'sural', 'fibular-motor-edb', 'superficial-fibular', 'tibial-f-ah',
  'ulnar-f-adm', 'radial-sensory-snuffbox', 'median-mixed-palm', 'ulnar-mixed-palm', 'fibular-motor-ta',
  'median-sensory-d3', 'ulnar-motor-fdi', 'saphenous', 'medial-antebrachial', 'ulnar-sensory-dorsal',
].flatMap(id => [[id, 'right'], [id, 'left']] as [string, Side][])

/**
 * A study of so many runs of an invented woman, both sides of each technique; some of it outside.
 * @param turn any number; another one gives other values
 */
export function studyOfRuns(count: number, turn = 0): Study {
  const shift = turn % 5 / 10
  if (count > order.length) throw new Error(`There are ${order.length} runs to choose from.`)
  return studySchema.parse({
    id: idOf(`study/${count}/${turn}`), studyDate: '2026-12-02', patient: { birthDate: '1974-03-14', sexForLimits: 'female' }, heightCm: 162, weightKg: 74, referralSide: 'both',
    temperatures: (['hand', 'foot'] as const).flatMap(segment => (['right', 'left'] as const).map(side => ({ id: idOf(`${segment}/${side}`), segment, side, celsius: 33, at: '2026-12-02T09:05:00.000Z', method: 'skin probe', warmed: false }))),
    runs: order.slice(0, count).map(([id, side]) => runOf(id, side, shift)),
  })
}
