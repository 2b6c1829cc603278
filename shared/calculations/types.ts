import type { Absence } from '../schemas/study'
import type { LimitSex, Side } from '../schemas/common'

/**
 * The assessment: everything the program says about a study, as plain JSON.
 * It is what the bench shows live, what the server keeps, what a signature freezes and what the report prints.
 */

/** A computed number, a coded absence, or the reason why there is none. Never NaN, never undefined. */
export type ComputedValue
  = | { kind: 'value', value: number, /** expanded uncertainty, k = 2 */ uncertainty?: number }
    | { kind: 'absent', absence: Absence }
    | { kind: 'not-computable', because: string }

/** One limit as it was applied, frozen with its origin. */
export interface AppliedLimit {
  bound: 'upper' | 'lower'
  value: number
  unit: string
  setId: string
  setVersion: number
  setTitle: string
  rowId: string
  /** "woman, 50 to 79", "50 to 79, BMI 24 and over": the subgroup of the row in words; '' when it is for everyone. */
  subgroup: string
  /** "97th percentile of observed values". */
  definition: string
  percentile: number | null
  basis: 'read' | 'from memory' | 'derived'
  /** A row from memory that a named person compared with the paper. */
  verified: boolean
  /** "from onset latency 3.3 ms at 140 mm": how a derived limit was made. */
  derivation?: string
}

export type Verdict
  = | { kind: 'within', limits: AppliedLimit[], /** closer to the limit than its uncertainty */ nearLimit: boolean }
    | { kind: 'outside', direction: 'above' | 'below', limit: AppliedLimit, limits: AppliedLimit[], nearLimit: boolean }
    /** No response where a set has a limit: flagged, but not counted in the chance line. */
    | { kind: 'absent', limits: AppliedLimit[] }
    /** The set bands this quantity by an item that is missing. */
    | { kind: 'not-judged', because: string }
    /** No row fits: never "normal". */
    | { kind: 'no-limit', because: string }
    /** Slow (or possibly masked) in a cold limb: not interpretable until repeated warm. */
    | { kind: 'cold', because: string, limits: AppliedLimit[], wouldBe: 'within' | 'above' | 'below' }
    /** The cold run that a warm one repeats: kept, struck through, out of flags and text. */
    | { kind: 'superseded', by: string }
    /** Not meant to be judged (distance, stimulus, context values). */
    | { kind: 'none' }

/** One number of the study with what the program says about it. */
export interface Result {
  /** Stable: `${runId}/${rowId}/${quantity}`, `compare/right/median-ulnar/onsetDifference`. */
  key: string
  runId?: string
  rowId?: string
  side?: Side
  /** A typed quantity id or a computed one (velocityMps, amplitudeFallPercent, …). */
  quantity: string
  /** Stimulation site id (a site's own number) or segment id (velocity, fall) it belongs to; left out where there is none. */
  at?: string
  /** "latency at wrist", "velocity, elbow to wrist", "sensory onset difference". */
  label: string
  unit: string
  typed: boolean
  value: ComputedValue
  /** As printed, without unit: "54", "5.2", "no response", "not computable". Rounded by the one rounding function. */
  print: string
  /** As printed: "± 2". Empty where there is none. */
  printUncertainty: string
  verdict: Verdict
  /** Is it a flag: outside, or absent where a limit exists, and neither cold nor superseded. */
  flagged: boolean
  /** The formula with its operands in words and numbers, and its source. */
  how?: { formula: string, source: string }
  /** Optional statistics where the source allows. */
  zScore?: number
  percentile?: number
}

export interface RunAssessment {
  runId: string
  technique: string
  side: Side
  /** "RIGHT median motor, abductor pollicis brevis". */
  title: string
  cold: { state: 'warm' | 'cold' | 'unknown' | 'not-needed', celsius: number | null, thresholdC: number | null, because: string }
  supersededBy?: string
  /** "ulnar motor not done", with its reason. */
  notDone?: string
  results: Result[]
}

export interface ComparisonAssessment {
  /** 'median-ulnar-sensory', 'side-difference/median-motor-apb', 'combined-sensory-index'. */
  id: string
  title: string
  side?: Side
  runIds: string[]
  results: Result[]
}

/** A sentence of the program about an entry or a run. */
export interface Remark {
  /** Stable, so that an answer (kept, with a reason) stays with it. */
  key: string
  code: string
  /** stop: cannot be right. check: unlikely, keep it and say why. note: for the reader. */
  strength: 'stop' | 'check' | 'note'
  sentence: string
  runId?: string
  rowId?: string
  quantity?: string
  /** What to do next, for example a stimulation to add. */
  suggestion?: { sentence: string, addTechnique?: string, addSite?: string, side?: Side }
  /** The reason with which a check was kept. */
  kept?: string
  source: string
}

export interface PatternResult {
  id: string
  version: number
  title: string
  side?: Side
  source: string
  basis: 'read' | 'memory' | 'derived'
  /** The whole rule as far as it can be said; offered, never concluded. */
  outcome: { met: 'met' | 'not-met' | 'not-assessable', label: string }
  criteria: { id: string, text: string, result: 'met' | 'not-met' | 'not-assessable', numbers: string, because?: string, basis: 'read' | 'memory' | 'derived' }[]
  runIds: string[]
}

/** One number of this study beside the same number of an earlier one. */
export interface EarlierChange {
  /** `earlier/${studyId}/${key of the result}`. */
  key: string
  resultKey: string
  runId?: string
  side?: Side
  studyId: string
  studyDate: string
  quantity: string
  label: string
  unit: string
  print: string
  printEarlier: string
  /** 100 x (now - then) / then, in per cent. */
  changePercent: ComputedValue
  /** Change in per cent that repeated measurement alone can make; null where no band is published. */
  bandPercent: number | null
  beyondBand: 'yes' | 'no' | 'not-known'
  /** "a response where there was none", "another technologist". */
  remarks: string[]
  source: string
}

export interface FindingSentence {
  /** Stable over recalculation: `run/${runId}`, `compare/right/median-ulnar-sensory`. */
  key: string
  runIds: string[]
  text: string
  /** The numbers it was made from: when this changes, an edited sentence is marked for review. */
  fingerprint: string
}

export interface ChanceLine {
  limitsApplied: number
  expectedOutside: number
  seenOutside: number
  /** Probability of at least so many outside in health, if independent. */
  probabilityAtLeastSeen: number
  assumption: string
  sentence: string
}

export interface Assessment {
  calculationVersion: string
  studyId: string
  person: { ageYears: number | null, sexForLimits: LimitSex | null, heightCm: number | null, weightKg: number | null, bmi: number | null, words: string }
  runs: RunAssessment[]
  comparisons: ComparisonAssessment[]
  remarks: Remark[]
  chance: ChanceLine
  patterns: PatternResult[]
  findings: FindingSentence[]
  /** Beside earlier signed studies of the same patient; empty when there are none. */
  changes?: EarlierChange[]
  setsUsed: { setId: string, version: number, title: string, citation: string, percentiles: string, recalledRows: number, verifiedRows: number }[]
  /** Keys of every flagged result, in printing order. */
  flagged: string[]
}

/** What the laboratory decided; everything has a default. */
export interface Policy {
  handMinimumC: number
  footMinimumC: number
  /** Expanded (k = 2): common practice, per laboratory. */
  distanceUncertaintyMm: number
  latencyUncertaintyMs: number
  /** Show temperature-corrected values beside the measured ones; off by default. */
  temperatureCorrection: boolean
  /** Pattern ids that the medical director turned on beyond those that rest on what was read. */
  patternsOn: string[]
  patternsOff: string[]
  leaveOutEntrapmentSites: boolean
  /** Sets in use at this site, the first that has a fitting row wins; [] reads "no limit: no set adopted here". */
  adopted: AdoptedSet[]
}
export interface AdoptedSet {
  setId: string
  version: number
  /** Only for these techniques; undefined means all. */
  techniques?: string[]
  adoptedOn: string
  adoptedBy: string
  /** Row ids from memory that a named person compared with the paper. */
  verifiedRows: string[]
}
export const defaultPolicy: Policy = {
  handMinimumC: 32,
  footMinimumC: 30,
  distanceUncertaintyMm: 5,
  latencyUncertaintyMs: 0.1,
  temperatureCorrection: false,
  patternsOn: [],
  patternsOff: [],
  leaveOutEntrapmentSites: false,
  adopted: [],
}

/** An earlier signed study of the same patient, as far as comparison needs it. */
export interface EarlierStudy { studyId: string, studyDate: string, siteName: string, technologist: string, assessment: Assessment }
