import type { StimulationSite } from './types'

/**
 * Distances in mm between stimulation sites, or from the stimulus to the recording electrode.
 * Usual ranges of adults: common practice, no publication. Possible ranges: this project's decision, wide enough for
 * small children and very tall people; only what cannot be right is stopped.
 */
type Range = NonNullable<StimulationSite['segmentMm']>

const range = (usualMin: number, usualMax: number, possibleMax: number, possibleMin = 10): Range =>
  ({ usualMin, usualMax, possibleMin, possibleMax })

export const distances = {
  /** Most distal stimulus to the recording electrode of a hand or foot muscle. */
  distalMotor: range(40, 130, 300),
  /** Stimulus to a muscle further away (deltoid, biceps, thigh, face). */
  proximalMuscle: range(40, 320, 500),
  /** A digit or cutaneous nerve at a fixed distance. */
  distalSensory: range(60, 180, 400),
  palm: range(50, 110, 250),
  /** Sensory recording after stimulation at the elbow. */
  longSensory: range(220, 480, 800),
  wristToPalm: range(60, 110, 250),
  forearm: range(150, 320, 500),
  acrossElbow: range(80, 140, 300),
  upperArm: range(100, 280, 450),
  axillaToErb: range(100, 300, 450),
  radialForearm: range(120, 320, 500),
  spiralGroove: range(80, 200, 350),
  /** Whole lower legs: under 60 mm not even a newborn's (common practice), so 33 is a reading in centimetres. */
  ankleToFibularHead: range(220, 450, 700, 60),
  acrossFibularHead: range(60, 140, 300),
  ankleToPoplitealFossa: range(300, 500, 800, 60),
  acrossInguinalLigament: range(50, 140, 250),
  /** Steps of a short-segment study, 20 mm: common practice. */
  shortStep: range(15, 25, 60),
  /** To a muscle of another nerve's stimulus beside the line: only context. */
  aside: range(40, 450, 800),
} as const satisfies Record<string, Range>
