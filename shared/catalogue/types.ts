import type { QuantityId } from './quantities'

export type RunKind = 'motor' | 'sensory' | 'mixed' | 'f-wave' | 'h-reflex' | 'repetitive' | 'blink' | 'needle'
export type Limb = 'arm' | 'leg' | 'face' | 'trunk'
/** Whose temperature judges a run. */
export type TemperatureSegment = 'hand' | 'foot'

/** A place where the nerve is stimulated (motor, sensory) or a row of its kind (trains, series). */
export interface StimulationSite {
  id: string
  label: string
  /**
   * Usual and possible distance in mm: to the previous, more distal site, or, for the most distal site and for every
   * sensory or mixed row, to the recording electrode. Outside usual is questioned, outside possible is stopped.
   */
  segmentMm?: { usualMin: number, usualMax: number, possibleMin: number, possibleMax: number }
  /** "forearm", "across the elbow": the segment that ends at this site, for labels and limits. */
  segment?: { id: string, label: string, entrapment?: boolean }
  /** Fixed distance of this site to the recording electrode where it differs from the technique's, mm. */
  standardDistanceMm?: number
  /** Laid out when the run is added; the others are one keystroke away. */
  usual?: boolean
  /**
   * Beside the nerve's own line: another nerve or branch, recorded from the same muscle to see whether fibres cross. It
   * makes no segment and stands in no order; its distance is not needed.
   */
  aside?: boolean
}

/**
 * One way of studying one nerve: the unit that is picked, recorded, judged and printed.
 * Ids never change; labels may.
 */
export interface Technique {
  id: string
  kind: RunKind
  /** 'median', 'superficial-fibular': the nerve's id; its words are in `nerveLabels`. */
  nerve: string
  /** "median motor", "median sensory, digit 2": without the side. */
  label: string
  /** Recording site id and label: 'apb', "abductor pollicis brevis". */
  recording: { id: string, label: string, short: string }
  limb: Limb
  temperatureSegment?: TemperatureSegment
  roots: string
  /** Standard distance of the first site that is laid out to the recording electrode, mm. */
  standardDistanceMm?: number
  /** Sensory only: what is usual in the sets; the run says what was done. */
  direction?: 'antidromic' | 'orthodromic'
  amplitudeDefinition?: 'onset-to-peak' | 'peak-to-peak' | 'baseline-to-peak'
  /** Distal to proximal. */
  sites: StimulationSite[]
  /** Columns, in order: which quantities each row takes. */
  quantities: QuantityId[]
  /** Ordinal or text columns (needle examination): id, label, choices. */
  ordinals?: { id: string, label: string, choices: readonly string[] }[]
  /** A short-segment study by itself: its segments under 80 mm need no declaration. */
  shortSegments?: boolean
  /** Said on screen where no shipped set has a limit for it. */
  withoutLimits?: string
}
