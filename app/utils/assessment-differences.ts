import type { Assessment, Result } from '#shared/calculations/types'

const allResults = (assessment: Assessment): Result[] => [...assessment.runs, ...assessment.comparisons].flatMap(part => part.results)
const said = (result: Result | undefined) => result ? `${result.print} (${result.verdict.kind})` : 'nothing'

/**
 * Results that this browser and the server see differently: they run the same calculation, so there should be none. A
 * difference means an old page or a changed set; the server's answer stands.
 *
 * @returns one sentence for each difference
 */
export function assessmentDifferences(mine: Assessment, server: Assessment): string[] {
  const own = new Map(allResults(mine).map(result => [result.key, result]))
  const theirs = new Map(allResults(server).map(result => [result.key, result]))
  return [...new Set([...own.keys(), ...theirs.keys()])].flatMap((key) => {
    const [a, b] = [own.get(key), theirs.get(key)]
    if (a && b && a.print === b.print && JSON.stringify(a.verdict) === JSON.stringify(b.verdict)) return []
    return [`${(b ?? a)?.label}: this page says ${said(a)}, the server ${said(b)}.`]
  })
}
