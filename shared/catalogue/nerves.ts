import { lateAndSpecialTechniques } from './late-and-special'
import { motorTechniques } from './motor'
import { needleTechniques } from './needle'
import { sensoryTechniques } from './sensory'
import type { StimulationSite, Technique } from './types'

export { nerveLabels } from './nerve-labels'

/** Every way of studying a nerve, in the order in which they are offered and printed. To add one: one entry in its file. */
export const techniques: readonly Technique[] = [...motorTechniques, ...sensoryTechniques, ...lateAndSpecialTechniques, ...needleTechniques]

const byId = new Map(techniques.map(technique => [technique.id, technique]))

/**
 * The technique with this id, or undefined when the catalogue has none.
 *
 * @example
 * techniqueOf('median-motor-apb')?.label // => 'median motor'
 */
export function techniqueOf(id: string): Technique | undefined {
  return byId.get(id)
}

/**
 * The stimulation site of a technique, or undefined.
 *
 * @example
 * siteOf('ulnar-motor-adm', 'above-elbow')?.segment?.id // => 'across-elbow'
 */
export function siteOf(techniqueId: string, siteId: string): StimulationSite | undefined {
  return byId.get(techniqueId)?.sites.find(site => site.id === siteId)
}

/**
 * Label with the recording site, once: for titles, without the side.
 *
 * @example
 * techniqueTitle(techniqueOf('median-motor-apb')!) // => 'median motor, abductor pollicis brevis'
 * techniqueTitle(techniqueOf('median-sensory-d2')!) // => 'median sensory, digit 2'
 */
export function techniqueTitle(technique: Technique): string {
  const { label, recording, kind } = technique
  const recordingIsSaid = label.includes(recording.label) || !['motor', 'f-wave', 'repetitive'].includes(kind)
  return recordingIsSaid ? label : `${label}, ${recording.label}`
}
