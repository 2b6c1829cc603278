import type { AppliedLimit, Result } from '../calculations/types'
import { limitsOf, limitWords, verdictWords } from '../plots/verdict-words'
import type { Cell, Mark, TextCell } from './blocks'
import { emptyCell, plainCell } from './blocks'
import type { ReportWords } from './words'

/** A row from memory that nobody compared with the paper yet. */
export const isRecalled = (limit: AppliedLimit): boolean => limit.basis === 'from memory' && !limit.verified

/** The mark of a value; none while it is within limits or not judged. */
export function markOf({ verdict, flagged }: Result): Mark | undefined {
  if (verdict.kind === 'outside') return verdict.direction
  if (verdict.kind === 'absent') return flagged ? 'absent' : undefined
  if (verdict.kind === 'cold') return 'cold'
  return verdict.kind === 'within' && verdict.nearLimit ? 'near' : undefined
}

/** A number with its mark and uncertainty, as printed; an empty cell where nothing was typed or computed. */
export function valueCell(result: Result | undefined): TextCell {
  if (!result || result.value.kind === 'not-computable') return emptyCell
  const mark = markOf(result)
  const text = [result.print, result.printUncertainty].filter(Boolean).join(' ')
  const doubtful = result.verdict.kind === 'outside' && result.verdict.nearLimit
  return { words: [{ text, strong: result.flagged }], ...(mark ? { mark } : {}), ...(doubtful ? { doubtful } : {}) }
}

/** The bar of the first judged result, with the same in words. */
export function barCell(judged: readonly Result[]): Cell {
  const first = judged.find(result => limitsOf(result.verdict).length > 0)
  return first ? { bar: first, text: verdictWords(first) } : emptyCell
}

/** Why a row has no limits, shortest first: "no limit: no set adopted here", "not judged: height missing". */
function reasonWithoutLimits(results: readonly Result[], words: ReportWords): string {
  for (const { verdict } of results) {
    if (verdict.kind === 'not-judged') return `not judged: ${verdict.because}`
    if (verdict.kind === 'no-limit') return `${words.noLimits}: ${verdict.because}`
  }
  return ''
}

/**
 * The limits a row was judged by, in the order of its columns: "≤ 4.4 · ≥ 4.2". Recalled ones say so below,
 * unless the whole table is recalled and a note says it once.
 */
export function limitsCell(results: readonly Result[], words: ReportWords, sayRecalled: boolean): TextCell {
  const judged = results.filter(result => limitsOf(result.verdict).length > 0)
  const text = judged.map(limitWords).join(' · ') || reasonWithoutLimits(results, words)
  const recalled = judged.some(result => limitsOf(result.verdict).some(isRecalled))
  const cold = results.find(result => result.verdict.kind === 'cold')
  const below = [cold && words.cold, recalled && sayRecalled && words.recalled].filter(Boolean).join('; ')
  return plainCell(text, below ? { below } : {})
}

/** Is every limit that was applied in these results recalled? False where none was applied. */
export function allRecalled(results: readonly Result[]): boolean {
  const limits = results.flatMap(result => limitsOf(result.verdict))
  return limits.length > 1 && limits.every(isRecalled)
}
