/**
 * Comparisons within one limb. Limits of a comparison stand in the tables under the comparison's id as technique.
 *
 * Side differences have the id `side-difference/<technique>`; in a table their `at` names the quantity compared
 * (latencyMs, onsetLatencyMs, peakLatencyMs, amplitudeMv, amplitudeUv, velocityMps, hLatencyMs, minimumLatencyMs, r1Ms).
 */
export interface Comparison {
  id: string
  label: string
  /** Technique ids: first minus second, or first over second. */
  first: string
  second: string
  /** Computed quantity ids. */
  quantities: string[]
  /** Fixed distance at which both are recorded, mm; a table may differ. */
  distanceMm?: number
  source: string
}

export const comparisons: readonly Comparison[] = [
  {
    id: 'median-ulnar-sensory', label: 'median against ulnar, digits 2 and 5', first: 'median-sensory-d2', second: 'ulnar-sensory-d5',
    quantities: ['onsetDifferenceMs', 'peakDifferenceMs'], distanceMm: 140, source: 'Grossart, Prahlow, Buschbacher 2006, as selected by Chen et al., Muscle Nerve 2016;54:371-377 (recalled)',
  },
  {
    id: 'median-ulnar-motor', label: 'median against ulnar, motor latency', first: 'median-motor-apb', second: 'ulnar-motor-adm',
    quantities: ['motorLatencyDifferenceMs'], distanceMm: 80, source: 'Chen et al., Muscle Nerve 2016;54:371-377 (recalled)',
  },
  {
    id: 'median-ulnar-ring', label: 'median against ulnar, digit 4', first: 'median-sensory-d4', second: 'ulnar-sensory-d4',
    quantities: ['peakDifferenceMs'], distanceMm: 140, source: 'Lew et al., Muscle Nerve 2000;23:1261-1264 (read)',
  },
  {
    id: 'median-ulnar-palm', label: 'median against ulnar, palm to wrist', first: 'median-mixed-palm', second: 'ulnar-mixed-palm',
    quantities: ['peakDifferenceMs'], distanceMm: 80, source: 'Lew et al., Muscle Nerve 2000;23:1261-1264 (read)',
  },
  {
    id: 'median-radial-thumb', label: 'median against radial, digit 1', first: 'median-sensory-d1', second: 'radial-sensory-d1',
    quantities: ['peakDifferenceMs'], distanceMm: 100, source: 'Lew et al., Muscle Nerve 2000;23:1261-1264 (read)',
  },
  {
    id: 'lumbrical-interosseous', label: 'second lumbrical against interosseous', first: 'median-motor-lumbrical', second: 'ulnar-motor-interosseous',
    quantities: ['motorLatencyDifferenceMs'], source: 'AAEM/AAN/AAPMR practice parameter, Jablecki et al., Muscle Nerve 2002;25:918-922 (summary read)',
  },
  {
    id: 'antebrachial', label: 'lateral against medial antebrachial', first: 'lateral-antebrachial', second: 'medial-antebrachial',
    quantities: ['onsetDifferenceMs', 'peakDifferenceMs'], distanceMm: 100, source: 'Buschbacher et al., Arch Phys Med Rehabil 2000;81:1563-1566 (abstract read)',
  },
  {
    id: 'sural-radial', label: 'sural against superficial radial amplitude', first: 'sural', second: 'radial-sensory-snuffbox',
    quantities: ['suralRadialRatio'], source: 'Rutkove et al., Muscle Nerve 1997;20:1236-1241 (abstract read)',
  },
]

/** The index has three parts, so it is not one comparison of two runs: peak latencies of palm, ring and thumb added. */
export const COMBINED_SENSORY_INDEX = 'combined-sensory-index'

/**
 * Id of the comparison of the two sides of one technique.
 *
 * @example
 * sideDifferenceId('sural') // => 'side-difference/sural'
 */
export function sideDifferenceId(technique: string): string {
  return `side-difference/${technique}`
}

/**
 * The techniques that a technique, side difference or comparison id rests on.
 *
 * @example
 * techniquesNeeded('sural-radial') // => ['sural', 'radial-sensory-snuffbox']
 * techniquesNeeded('side-difference/sural') // => ['sural']
 */
export function techniquesNeeded(id: string): string[] {
  if (id.startsWith('side-difference/')) return [id.slice('side-difference/'.length)]
  const parts = id === COMBINED_SENSORY_INDEX ? indexParts : comparisons.filter(comparison => comparison.id === id)
  return parts.length === 0 ? [id] : parts.flatMap(({ first, second }) => [first, second])
}

const indexParts = comparisons.filter(({ id }) => ['median-ulnar-palm', 'median-ulnar-ring', 'median-radial-thumb'].includes(id))
