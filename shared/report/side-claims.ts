import { nerveLabels } from '../catalogue/nerve-labels'
import type { Side } from '../schemas/common'
import type { ImpressionLine } from '../schemas/report'

/** What one clause says about a side: abnormal or not, of which nerves ([] when it names none). */
export interface SideClaim { side: Side, abnormal: boolean, nerves: string[], /** the clause itself, for the question */ words: string }

const bothSides: readonly Side[] = ['right', 'left']
/** A clause ends at a full stop, a semicolon, or where the sense turns. */
const clauseEnds = /[.;\n]+|,?\s+(?:but|whereas|while|however)\s+|,\s+(?=(?:no|not|without|normal)\b)/i
const saysNo = /\b(?:no|not|never|without|normal|unremarkable|within (?:the )?limits|spared|preserved)\b/i
/** Only where it cannot be a side: "is left" alone may well be one, and a needless question does no harm. */
const aVerb = /\bleft (?:out|undone|over)\b|\bleft to (?:do|say|be)\b/gi

/** Common names that point to one nerve without naming it. */
const byName: readonly [RegExp, string][] = [[/\bcarpal\b/i, 'median'], [/\bcubital\b/i, 'ulnar'], [/\bperoneal\b/i, 'fibular'], [/\btarsal tunnel\b/i, 'tibial'], [/\bfoot drop\b/i, 'fibular']]

/**
 * The sides that English words name. "Both" beside a side that is named ("both nerves on the RIGHT") is about
 * nerves; alone it means both sides.
 *
 * @example sidesInWords('bilateral median neuropathy') // => ['right', 'left']
 */
export function sidesInWords(text: string): Side[] {
  const words = text.replace(aVerb, '')
  const named = bothSides.filter(side => new RegExp(`\\b${side}(?:-(?:sided|hand(?:ed)?))?\\b`, 'i').test(words))
  if (named.length > 0) return named
  return /\bbilateral(?:ly)?\b|\bboth\b|\beither side\b/i.test(words) ? [...bothSides] : []
}

/** Nerve ids that the words name, the longest name first so that "superficial fibular" is not also "fibular". */
function nervesInWords(text: string): string[] {
  let rest = text.toLowerCase()
  const found: string[] = []
  const labels = Object.entries(nerveLabels).sort(([, a], [, b]) => b.length - a.length)
  for (const [nerve, label] of labels) {
    if (!new RegExp(`\\b${label.toLowerCase()}\\b`).test(rest)) continue
    found.push(nerve)
    rest = rest.replaceAll(label.toLowerCase(), ' ')
  }
  return [...new Set([...found, ...byName.filter(([name]) => name.test(text)).map(([, nerve]) => nerve)])]
}

const fieldSides = (side: ImpressionLine['side']): Side[] => side === 'both' ? [...bothSides] : side ? [side] : []

/**
 * What a line of the impression claims, clause by clause. The fields beside the words count too: they supply side and
 * nerve where the clause names none, and whether it is abnormal where the reader said so and the clause is not a denial.
 *
 * @param readsWords whether the words themselves are understood; only English is, elsewhere the fields alone speak
 * @example
 * sideClaims({ words: 'RIGHT median neuropathy. Nothing on the LEFT.', … }, true)
 */
export function sideClaims(line: Pick<ImpressionLine, 'words' | 'nerve' | 'side' | 'abnormal'>, readsWords: boolean): SideClaim[] {
  const clauses = readsWords ? line.words.split(clauseEnds).map(clause => clause?.trim() ?? '').filter(Boolean) : []
  const fromWords = clauses.flatMap(clause => clauseClaims(clause, line, clauses.length === 1))
  const claimed = fieldSides(line.side).filter(side => !fromWords.some(claim => claim.side === side && claim.abnormal === (line.abnormal ?? true)))
  const fromFields = claimed.map((side): SideClaim => ({ side, abnormal: line.abnormal ?? !saysNo.test(line.words), nerves: line.nerve ? [line.nerve] : [], words: line.words }))
  return [...fromWords, ...fromFields]
}

function clauseClaims(clause: string, line: Pick<ImpressionLine, 'nerve' | 'abnormal'>, alone: boolean): SideClaim[] {
  const named = nervesInWords(clause)
  const nerves = named.length > 0 ? named : line.nerve ? [line.nerve] : []
  const denied = saysNo.test(clause) || /\bnothing\b|\bnone\b/i.test(clause)
  const abnormal = alone && line.abnormal !== null ? line.abnormal : !denied
  return sidesInWords(clause).map(side => ({ side, abnormal, nerves, words: clause }))
}

/** Do the words name a side that the field beside them excludes? */
export function wordsContradictField(line: Pick<ImpressionLine, 'words' | 'side'>): boolean {
  const named = sidesInWords(line.words)
  const field = fieldSides(line.side)
  return field.length > 0 && named.length > 0 && !field.some(side => named.includes(side))
}

/** Is a flagged nerve the one that was claimed, or a branch of it? @example isNerveOrBranch('superficial-radial', 'radial') // => true */
export function isNerveOrBranch(flagged: string, claimed: string): boolean {
  return flagged === claimed || flagged.split('-').includes(claimed)
}
