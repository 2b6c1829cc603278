import type { ComparisonAssessment, Result } from '../../calculations/types'
import type { RunKind } from '../../catalogue/types'
import { limitsOf } from '../../plots/verdict-words'
import { heading, plainCell, withSides, type Block, type ReportSection, type TableBlock, type TextCell } from '../blocks'
import { barCell, limitsCell, tableNotes, valueCell } from '../limits'
import { columnsOf } from '../run-table'
import { runsOf, type FrozenRun, type ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'

/** A number with its unit, or the reason why there is none. */
function valueOrReason(result: Result, words: ReportWords): TextCell {
  if (result.value.kind === 'not-computable') return plainCell(`${words.notComputable}: ${words.say(result.value.because)}`)
  const cell = valueCell(result, words)
  return result.value.kind === 'value' && result.unit && result.unit !== '1' ? { ...cell, words: [...cell.words, { text: ` ${result.unit}` }] } : cell
}

interface Line { name: string, result: Result, first: boolean }

/** One line for each result: name, value, bar, limits; below it what the limits are. */
function resultTable(caption: string, first: string, lines: Line[], words: ReportWords): Block[] {
  const notes = tableNotes(lines.map(line => [line.result]), words)
  const row = ({ name, result, first: isFirst }: Line): TableBlock['rows'][number] =>
    ({ cells: [{ words: withSides(name) }, valueOrReason(result, words), barCell([result], words), limitsCell([result], words, notes)], first: isFirst, struck: result.verdict.kind === 'superseded' })
  const table: TableBlock = {
    kind: 'table',
    caption,
    columns: [{ label: first, align: 'left', wide: true }, { label: words.columns.value, align: 'right' }, { label: '', align: 'bar' }, { label: words.columns.limits, align: 'right' }],
    rows: lines.map(row),
  }
  return [table, ...notes.blocks]
}

const isJudged = (result: Result) => result.flagged || limitsOf(result.verdict).length > 0 || result.verdict.kind === 'not-judged'

/** "RIGHT sensory onset difference"; a comparison of the two sides has no side of its own and is named by its title. */
function nameOf({ title, side }: ComparisonAssessment, result: Result, words: ReportWords): string {
  const own = side ?? result.side
  return own ? `${words.sides[own]} ${words.say(result.label)}` : `${words.say(title)}: ${words.say(result.label)}`
}

function comparisonLines(comparison: ComparisonAssessment, words: ReportWords): Line[] {
  const judged = comparison.results.some(isJudged)
  const ofSides = comparison.id.startsWith('side-difference')
  const shown = comparison.results.filter(result => isJudged(result) || (result.value.kind === 'not-computable' && (judged || !ofSides)))
  return shown.map((result, index) => ({ name: nameOf(comparison, result, words), result, first: index === 0 }))
}

/**
 * Nerve against nerve and side against side, where a limit was looked for. A comparison whose counterpart is
 * missing says so; one that no set judges is left to the tables above.
 */
export const comparisons: ReportSection<ReportSource> = {
  id: 'comparisons',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const lines = snapshot.assessment.comparisons.flatMap(comparison => comparisonLines(comparison, words))
    return lines.length > 0 ? [heading(2, words.comparisons, 'comparisons'), ...resultTable(words.comparisons, words.columns.comparison, lines, words)] : []
  },
}

const tabled: RunKind[] = ['motor', 'sensory', 'mixed', 'f-wave', 'h-reflex', 'repetitive', 'blink']
/** What is within its limit stands in the findings; a line of its own is for what a reader must see. */
const stands = ({ flagged, verdict }: Result) => flagged || verdict.kind === 'cold' || ((verdict.kind === 'within' || verdict.kind === 'outside') && verdict.nearLimit)

function linesOfKind(kind: RunKind, runs: FrozenRun[], words: ReportWords): Line[] {
  const shown = columnsOf(kind, runs)
  return runs.flatMap(({ assessment }) => assessment.results
    .filter(result => stands(result) && !shown.includes(result.quantity))
    .map((result, index) => ({ name: `${words.say(assessment.title)}: ${words.say(result.label)}`, result, first: index === 0 })))
}

/** Computed values outside or near a limit that have no column of their own: falls between sites, drops of velocity. */
export const derived: ReportSection<ReportSource> = {
  id: 'derived',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const lines = tabled.flatMap(kind => linesOfKind(kind, runsOf(snapshot, [kind]), words))
    return lines.length > 0 ? [heading(2, words.derived, 'derived'), ...resultTable(words.derived, words.columns.computed, lines, words)] : []
  },
}
