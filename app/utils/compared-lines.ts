import type { ComparisonAssessment, Result } from '#shared/calculations/types'

/** One line of the table of comparisons: the same comparison of both sides shares it. */
export interface ComparedLine { key: string, title: string, label: string, unit: string, isJudged: boolean, right?: Result, left?: Result, both?: Result }

const withoutSide = (words: string) => words.replace(/^(RIGHT|LEFT) /, '')
const isJudged = (result: Result) => result.flagged || result.verdict.kind === 'within' || result.verdict.kind === 'outside' || result.verdict.kind === 'cold'

/**
 * Comparisons as lines: RIGHT, LEFT, or between the sides. A result that appears more than once for its quantity (one per
 * segment) keeps a line for each label.
 */
export function comparedLines(comparisons: readonly ComparisonAssessment[]): ComparedLine[] {
  const lines = new Map<string, ComparedLine>()
  for (const comparison of comparisons) {
    for (const result of comparison.results) {
      const key = `${comparison.id}/${result.quantity}/${withoutSide(result.label)}`
      const line = lines.get(key) ?? { key, title: withoutSide(comparison.title), label: withoutSide(result.label), unit: result.unit, isJudged: false }
      line[comparison.side ?? 'both'] = result
      line.isJudged ||= isJudged(result)
      lines.set(key, line)
    }
  }
  return [...lines.values()]
}
