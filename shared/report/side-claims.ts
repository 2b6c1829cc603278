import type { Side } from '../schemas/common'
import type { ImpressionLine } from '../schemas/report'
import { sideWordsOf } from './side-words'

/** What one clause says about a side: abnormal or not, of which nerves ([] when it names none). */
export interface SideClaim { side: Side, abnormal: boolean, nerves: string[], /** the clause itself, for the question */ words: string }

const bothSides: readonly Side[] = ['right', 'left']

/**
 * The sides that words of the report's language name. "Both" beside a side that is named ("both nerves on the RIGHT") is
 * about nerves; alone it means both sides.
 *
 * @example sidesInWords('bilateral median neuropathy', 'en') // => ['right', 'left']
 * @example sidesInWords('Läsion des N. medianus links', 'de') // => ['left']
 */
export function sidesInWords(text: string, language: string): Side[] {
  const lists = sideWordsOf(language)
  const words = lists.reduce((rest, list) => rest.replace(list.notASide, ''), written(text, language))
  const named = bothSides.filter(side => lists.some(list => list.named[side].test(words)))
  if (named.length > 0) return named
  return lists.some(list => list.both.test(words)) ? [...bothSides] : []
}

/** Abbreviations written out, so that their full stop ends no clause and hides no side. */
function written(text: string, language: string): string {
  return sideWordsOf(language).flatMap(list => list.written).reduce((rest, [short, long]) => rest.replace(short, long), text)
}

function clausesOf(text: string, language: string): string[] {
  return sideWordsOf(language).reduce((clauses, list) => clauses.flatMap(clause => clause.split(list.clauseEnds)), [written(text, language)]).map(clause => clause.trim()).filter(Boolean)
}

const isDenied = (text: string, language: string) => sideWordsOf(language).some(list => list.saysNo.test(text))

/** Nerve ids that the words name, each word counted once. */
function nervesInWords(text: string, language: string): string[] {
  let rest = text
  const found: string[] = []
  for (const [name, nerve] of sideWordsOf(language).flatMap(list => list.nerves)) {
    const without = rest.replace(name, ' ')
    if (without !== rest) found.push(nerve)
    rest = without
  }
  return [...new Set(found)]
}

const fieldSides = (side: ImpressionLine['side']): Side[] => side === 'both' ? [...bothSides] : side ? [side] : []

/**
 * What a line of the impression claims, clause by clause. The fields beside the words count too: they supply side and
 * nerve where the clause names none, and whether it is abnormal where the reader said so and the clause is not a denial.
 *
 * @param language the report's; in one without a list of words the fields alone speak
 * @example
 * sideClaims({ words: 'RIGHT median neuropathy. Nothing on the LEFT.', … }, true)
 */
export function sideClaims(line: Pick<ImpressionLine, 'words' | 'nerve' | 'side' | 'abnormal'>, language: string): SideClaim[] {
  const clauses = clausesOf(line.words, language).filter(() => sideWordsOf(language).length > 0)
  const fromWords = clauses.flatMap(clause => clauseClaims(clause, line, clauses.length === 1, language))
  const claimed = fieldSides(line.side).filter(side => !fromWords.some(claim => claim.side === side && claim.abnormal === (line.abnormal ?? true)))
  const fromFields = claimed.map((side): SideClaim => ({ side, abnormal: line.abnormal ?? !isDenied(line.words, language), nerves: line.nerve ? [line.nerve] : [], words: line.words }))
  return [...fromWords, ...fromFields]
}

function clauseClaims(clause: string, line: Pick<ImpressionLine, 'nerve' | 'abnormal'>, alone: boolean, language: string): SideClaim[] {
  const named = nervesInWords(clause, language)
  const nerves = named.length > 0 ? named : line.nerve ? [line.nerve] : []
  const abnormal = alone && line.abnormal !== null ? line.abnormal : !isDenied(clause, language)
  return sidesInWords(clause, language).map(side => ({ side, abnormal, nerves, words: clause }))
}

/** Do the words name a side that the field beside them excludes? */
export function wordsContradictField(line: Pick<ImpressionLine, 'words' | 'side'>, language: string): boolean {
  const named = sidesInWords(line.words, language)
  const field = fieldSides(line.side)
  return field.length > 0 && named.length > 0 && !field.some(side => named.includes(side))
}

/** Is a flagged nerve the one that was claimed, or a branch of it? @example isNerveOrBranch('superficial-radial', 'radial') // => true */
export function isNerveOrBranch(flagged: string, claimed: string): boolean {
  return flagged === claimed || flagged.split('-').includes(claimed)
}
