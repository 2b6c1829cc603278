import type { Side } from '../../schemas/common'
import type { Run, Study } from '../../schemas/study'
import type { AppliedLimit, Assessment, ComparisonAssessment, Policy, Result, RunAssessment } from '../types'

/** Everything a published criterion may use: what was measured, what was computed from it, and the limits that applied. */
export interface PatternInput {
  study: Study
  policy: Policy
  person: Assessment['person']
  /** Every run of the study, in its order, the superseded and the not done ones included (`supersededBy`, `notDone`). */
  runs: readonly RunAssessment[]
  comparisons: readonly ComparisonAssessment[]
  /** The run that stands for this technique and side: measured, not superseded, warm before cold, then the latest. */
  runFor: (technique: string, side: Side) => RunAssessment | undefined
  /** The same as it was recorded. */
  recordedRun: (runId: string) => Run | undefined
  /** A result of a run by quantity and, where it matters, site or segment id. */
  resultOf: (run: RunAssessment | undefined, quantity: string, at?: string) => Result | undefined
  /** Every result of every run and comparison, in printing order. */
  results: readonly Result[]
  /**
   * The limit of a result, also where the verdict is cold or absent, and for a sensory velocity the one derived from the
   * onset latency; or why there is none ("height missing", "no set adopted here").
   */
  limitOf: (result: Result | undefined, bound: AppliedLimit['bound']) => AppliedLimit | string
}
