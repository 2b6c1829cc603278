import type { AppliedLimit, Result } from '../calculations/types'
import { valueText } from '../calculations/findings'
import { limitsOf, limitText as limitNumber, verdictWords } from '../plots/verdict-words'
import { emptyCell, note, plainCell, type Cell, type Mark, type NoteBlock, type TextCell } from './blocks'
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
export function valueCell(result: Result | undefined, words: ReportWords): TextCell {
  if (!result || result.value.kind === 'not-computable') return emptyCell
  const mark = markOf(result)
  const text = result.value.kind === 'value' ? [result.print, result.printUncertainty].filter(Boolean).join(' ') : words.say(result.print)
  const doubtful = result.verdict.kind === 'outside' && result.verdict.nearLimit
  return { words: [{ text, strong: result.flagged }], ...(mark ? { mark } : {}), ...(doubtful ? { doubtful } : {}) }
}

/** A result with what its limit says, for whoever does not see the drawing. */
export const resultWords = (result: Result, words: ReportWords): string => words.language === 'en' ? verdictWords(result) : valueText(result, words.drafted)

/** The bar of the first judged result, with the same in words. */
export function barCell(judged: readonly Result[], words: ReportWords): Cell {
  const first = judged.find(result => limitsOf(result.verdict).length > 0)
  return first ? { bar: first, text: resultWords(first, words) } : emptyCell
}

/** Why a result has no limit: "no limit: age 5 is outside 19 to 79", "not judged: height missing"; '' where it has one or needs none. */
function reasonOf({ verdict }: Result, words: ReportWords): string {
  if (verdict.kind === 'not-judged') return `${words.notJudged}: ${words.say(verdict.because)}`
  return verdict.kind === 'no-limit' ? `${words.noLimits}: ${words.say(verdict.because)}` : ''
}

/** The reasons in a table, each once, in order; rows name them by letter where there are several. */
export function reasonsAmong(rows: readonly (readonly Result[])[], words: ReportWords): string[] {
  const withoutAny = rows.filter(results => !results.some(result => limitsOf(result.verdict).length > 0))
  return [...new Set(withoutAny.flatMap(results => results.map(result => reasonOf(result, words)).find(Boolean) ?? []))]
}

const letter = (index: number) => String.fromCharCode(97 + index)

function shortReason(results: readonly Result[], words: ReportWords, reasons: readonly string[]): string {
  const reason = results.map(result => reasonOf(result, words)).find(Boolean)
  if (!reason) return ''
  const short = reason.slice(0, reason.indexOf(':'))
  return reasons.length > 1 ? `${short} ${letter(reasons.indexOf(reason))}` : short
}

const sign = (limit: AppliedLimit) => limit.bound === 'upper' ? '≤' : '≥'

/** "≤ 4.4", or "≤ 4.4 r" where the table marks recalled ones. */
function limitText(result: Result, markRecalled: boolean): string {
  return limitsOf(result.verdict).map(limit => `${sign(limit)} ${limitNumber(limit, result.quantity)}${markRecalled && isRecalled(limit) ? ` ${recalledMark}` : ''}`).join(', ')
}

/** Stands after a recalled limit in a table that has others too; a note below the table says what it means. */
export const recalledMark = 'r'

/** The limits a row was judged by, in the order of its columns: "≤ 4.4 · ≥ 4.2". */
export function limitsCell(results: readonly Result[], words: ReportWords, { markRecalled, reasons }: TableNotes): TextCell {
  const judged = results.filter(result => limitsOf(result.verdict).length > 0)
  const text = judged.map(result => limitText(result, markRecalled)).join(' · ') || shortReason(results, words, reasons)
  const cold = results.some(result => result.verdict.kind === 'cold')
  return plainCell(text, cold ? { below: words.cold } : {})
}

/** What stands below a table instead of in every row. */
export interface TableNotes { markRecalled: boolean, reasons: string[], blocks: NoteBlock[] }

/** @param rows the shown results of each row */
export function tableNotes(rows: readonly (readonly Result[])[], words: ReportWords): TableNotes {
  const applied = rows.flat().flatMap(result => limitsOf(result.verdict))
  const some = applied.some(isRecalled)
  const all = some && applied.every(isRecalled)
  const reasons = reasonsAmong(rows, words)
  const recalled = some ? [note('plain', all ? words.allRecalled : words.someRecalled(recalledMark))] : []
  const named = reasons.map((reason, index) => reasons.length > 1 ? `${letter(index)} ${reason}` : `${reason.charAt(0).toUpperCase()}${reason.slice(1)}`)
  return { markRecalled: some && !all, reasons, blocks: [...recalled, ...(named.length > 0 ? [note('plain', `${named.join('; ')}.`)] : [])] }
}
