interface Keyed { id?: string, runId?: string }
/** A study, or its assessment: many parts, and the runs, which are large. */
interface WithRuns { runs: Keyed[] }

/** What changed since the one before: parts that stayed are not sent and not drawn again. */
export interface RunsPatch<W extends WithRuns> {
  /** Every run by id, in order. */
  runIds: string[]
  runs: W['runs']
  parts: Partial<Omit<W, 'runs'>>
}

const idOf = (run: Keyed) => run.runId ?? run.id ?? ''
const isSame = (a: unknown, b: unknown) => a === b || JSON.stringify(a) === JSON.stringify(b)

/** @example patchOf(before, after).runs.map(run => run.runId) // => the one run that was typed into */
export function patchOf<W extends WithRuns>(before: W | undefined, after: W): RunsPatch<W> {
  const known = new Map(before?.runs.map(run => [idOf(run), run]))
  const names = new Set([...Object.keys(before ?? {}), ...Object.keys(after)] as (keyof W)[])
  const parts = [...names].filter(name => name !== 'runs' && !isSame(before?.[name], after[name])).map(name => [name, after[name]])
  return { runIds: after.runs.map(idOf), runs: after.runs.filter(run => !isSame(known.get(idOf(run)), run)), parts: Object.fromEntries(parts) }
}

/** The whole with what changed; what did not keeps its objects. */
export function withPatch<W extends WithRuns>(before: W | undefined, { runIds, runs, parts }: RunsPatch<W>): W {
  const known = new Map([...before?.runs ?? [], ...runs].map(run => [idOf(run), run]))
  return { ...before, ...parts, runs: runIds.flatMap(id => known.get(id) ?? []) } as unknown as W
}
