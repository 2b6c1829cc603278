import type { ReferenceTable } from '../schemas/reference-table'
import type { Side } from '../schemas/common'
import type { Study } from '../schemas/study'
import { chanceOf } from './chance'
import { compareWithEarlier } from './compare-with-earlier'
import { compareWithinLimbs } from './comparisons'
import { draftFindings } from './findings'
import { assessPatterns, type PatternInput } from './patterns'
import { findRemarks } from './plausibility'
import { assessRun } from './runs'
import { setsUsed } from './sets-used'
import { compareSides } from './side-comparisons'
import { standingRun, studyContext, type StudyContext } from './study-context'
import type { AppliedLimit, Assessment, ComparisonAssessment, EarlierStudy, Policy, Result, RunAssessment } from './types'

/** Stands in every assessment and every signed report. Raised whenever a result could come out differently. */
export const CALCULATION_VERSION = '1.1.1'

/**
 * Everything the program says about a study: results with limits and verdicts, comparisons, remarks, the chance line,
 * pattern check lists, draft findings and the change since earlier studies. Plain JSON, the same in the browser and on
 * the server; no clock, no database. Never fails on a study that its schema accepts.
 *
 * @example
 * assessStudy(study, referenceTables, { ...defaultPolicy, adopted }).flagged // => ['run-1/row-1/latencyMs', …]
 */
export function assessStudy(study: Study, tables: readonly ReferenceTable[], policy: Policy, earlier: readonly EarlierStudy[] = []): Assessment {
  const context = studyContext(study, tables, policy)
  const runs = assessRuns(context)
  const comparisons = [...compareWithinLimbs(context), ...compareSides(context)]
  const results = resultsOf([...runs, ...comparisons])
  return {
    calculationVersion: CALCULATION_VERSION,
    studyId: study.id,
    person: context.person,
    runs,
    comparisons,
    remarks: findRemarks(context, runs, comparisons),
    chance: chanceOf(results),
    patterns: assessPatterns(patternInput(context, runs, comparisons, results)),
    findings: draftFindings(context, runs, comparisons),
    changes: earlier.length > 0 ? compareWithEarlier({ runs }, earlier) : [],
    setsUsed: setsUsed(context.applied, tables),
    flagged: results.filter(result => result.flagged).map(result => result.key),
  }
}

/** Motor runs first, since F-waves use the velocity of their nerve; the answer keeps the order of the study. */
function assessRuns(context: StudyContext): RunAssessment[] {
  const isMotor = (index: number) => context.runs[index]?.technique?.kind === 'motor'
  const places = context.runs.map((_, index) => index)
  for (const index of [...places.filter(isMotor), ...places.filter(index => !isMotor(index))]) {
    const known = context.runs[index]
    if (known) context.assessed.set(known.run.id, assessRun(context, known))
  }
  return context.runs.map(known => context.assessed.get(known.run.id)).filter(run => run !== undefined)
}

function resultsOf(parts: readonly { results: readonly Result[] }[]): Result[] {
  const all: Result[] = []
  for (const { results } of parts) all.push(...results)
  return all
}

/** What the published criteria may look at. */
function patternInput(context: StudyContext, runs: RunAssessment[], comparisons: ComparisonAssessment[], results: readonly Result[]): PatternInput {
  return {
    study: context.study, policy: context.policy, person: context.person, runs, comparisons,
    runFor: (technique: string, side: Side) => {
      const known = standingRun(context, technique, side)
      return known && context.assessed.get(known.run.id)
    },
    recordedRun: runId => context.known.get(runId)?.run,
    resultOf: (run, quantity, at) => run?.results.find(result => result.quantity === quantity && (at === undefined || result.at === at)),
    limitOf: (result, bound) => limitOfResult(context, result, bound),
    results,
  }
}

const noneFor = { upper: 'none for a upper bound', lower: 'none for a lower bound' }

function limitOfResult(context: StudyContext, result: Result | undefined, bound: AppliedLimit['bound']): AppliedLimit | string {
  if (!result) return 'not recorded'
  const { verdict } = result
  if ('limits' in verdict) return verdict.limits.find(limit => limit.bound === bound) ?? noneFor[bound]
  const unsaid = context.limitsUnsaid.get(result)
  if (unsaid) return unsaid[bound] ?? noneFor[bound]
  return verdict.kind === 'no-limit' || verdict.kind === 'not-judged' ? verdict.because : 'no limit'
}
