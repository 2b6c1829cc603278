import type { Assessment, Result, Verdict } from '#shared/calculations/types'

/** A verdict in a few signs: "within ≤ 4.4", "outside ≤ 4.4, below", "no-limit: no set adopted here". */
export function verdictLine(verdict: Verdict): string {
  const limits = 'limits' in verdict ? verdict.limits.map(({ bound, value }) => ` ${bound === 'upper' ? '≤' : '≥'} ${value}`).join('') : ''
  const reason = 'because' in verdict ? `: ${verdict.because}` : ''
  const near = 'nearLimit' in verdict && verdict.nearLimit ? ', near' : ''
  return `${verdict.kind}${limits}${'direction' in verdict ? `, ${verdict.direction}` : ''}${near}${reason}`
}

/** What a person sees of a result: "latency at wrist 3.5 ± 0.1 ms". */
export function printed({ label, print, printUncertainty, unit, value }: Result): string {
  return [label, print, printUncertainty, value.kind === 'value' ? unit : ''].filter(Boolean).join(' ')
}

/** All of a result but its limits: "m/m-0/latencyMs | latency at wrist 3.5 ms | 3.5 and 3.4 | common practice". */
export function resultLine(result: Result): string {
  const because = result.value.kind === 'not-computable' ? result.value.because : ''
  return [result.key, printed(result), because, result.how?.formula, result.how?.source].filter(Boolean).join(' | ')
}

export const runLines = ({ runs }: Assessment, runId: string): string[] => runs.find(run => run.runId === runId)!.results.map(resultLine)
export const comparisonLines = ({ comparisons }: Assessment, id: string): string[] => comparisons.filter(one => one.id === id).flatMap(one => one.results.map(resultLine))
