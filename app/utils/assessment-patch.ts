import type { Assessment, RunAssessment } from '#shared/calculations/types'

/** What of an assessment changed since the one before: parts that stayed are not sent and not drawn again. */
export interface AssessmentPatch {
  /** Every run by id, in order. */
  runIds: string[]
  runs: RunAssessment[]
  parts: Partial<Omit<Assessment, 'runs'>>
}

const isSame = (a: unknown, b: unknown) => a === b || JSON.stringify(a) === JSON.stringify(b)

/** @example patchOf(before, after).runs.map(run => run.runId) // => the one run that was typed into */
export function patchOf(before: Assessment | undefined, after: Assessment): AssessmentPatch {
  const known = new Map(before?.runs.map(run => [run.runId, run]))
  const { runs, ...rest } = after
  const parts = Object.entries(rest).filter(([name, part]) => !isSame(before?.[name as keyof Assessment], part))
  return { runIds: runs.map(run => run.runId), runs: runs.filter(run => !isSame(known.get(run.runId), run)), parts: Object.fromEntries(parts) }
}

/** The assessment with what changed; what did not keeps its objects. */
export function withPatch(before: Assessment | undefined, { runIds, runs, parts }: AssessmentPatch): Assessment {
  const known = new Map([...before?.runs ?? [], ...runs].map(run => [run.runId, run]))
  return { ...before, ...parts, runs: runIds.flatMap(id => known.get(id) ?? []) } as Assessment
}
