import type { LimitRow } from '../schemas/reference-table'
import type { LimitSex } from '../schemas/common'

/** Who a limit is looked up for. `bmi` is the value of `bodyMassIndex`, one decimal. */
export interface LimitPerson {
  /** Age on the study date: completed years, or a fraction below one year (`ageInYears`). */
  ageYears: number | null
  sexForLimits: LimitSex | null
  heightCm: number | null
  bmi: number | null
}

/**
 * What a limit is looked up for.
 *
 * technique: a technique id, or a comparison id (`median-ulnar-sensory`, `side-difference/sural`).
 * at: the stimulation site id (latency, amplitude; velocity of a sensory row), the segment id (motor velocity, drop, fall),
 * the quantity compared (side differences), or null (F-wave, H-reflex, blink, comparisons).
 * distanceMm: stimulus to recording electrode; what is compared with a source's fixed distance. Null when not typed.
 */
export interface LimitQuery {
  technique: string
  quantity: string
  at: string | null
  direction: LimitRow['direction']
  amplitudeDefinition: LimitRow['amplitudeDefinition']
  distanceMm: number | null
  person: LimitPerson
}
