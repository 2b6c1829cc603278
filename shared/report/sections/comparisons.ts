import type { Result } from '../../calculations/types'
import { limitsOf } from '../../plots/verdict-words'
import { heading, plainCell, withSides, type ReportSection, type TableBlock, type TextCell } from '../blocks'
import { barCell, limitsCell, valueCell } from '../limits'
import { columnsOf } from '../run-table'
import { runsOf, type FrozenRun, type ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'
import type { RunKind } from '../../catalogue/types'

/** A number, or the reason why there is none. */
function valueOrReason(result: Result, words: ReportWords): TextCell {
  if (result.value.kind !== 'not-computable') return withUnit(valueCell(result), result.unit)
  return plainCell(`${words.notComputable}: ${result.value.because}`)
}
const withUnit = (cell: TextCell, unit: string): TextCell => unit && unit !== '1' ? { ...cell, words: [...cell.words, { text: ` ${unit}` }] } : cell

function resultRow(name: string, result: Result, words: ReportWords, first: boolean): TableBlock['rows'][number] {
  return { cells: [{ words: withSides(name) }, valueOrReason(result, words), barCell([result]), limitsCell([result], words, true)], first, struck: result.verdict.kind === 'superseded' }
}

function table(caption: string, first: string, rows: TableBlock['rows'], words: ReportWords): TableBlock {
  return {
    kind: 'table',
    caption,
    columns: [{ label: first, align: 'left', wide: true }, { label: words.columns.value, align: 'right' }, { label: '', align: 'bar' }, { label: words.columns.limits, align: 'right' }],
    rows,
  }
}

const isJudged = (result: Result) => result.flagged || limitsOf(result.verdict).length > 0 || result.verdict.kind === 'not-judged'
/** "RIGHT sensory onset difference": the side once, in front. */
const named = (side: 'right' | 'left' | undefined, label: string, words: ReportWords) => side && !/RIGHT|LEFT/.test(label) ? `${words.sides[side]} ${label}` : label

/**
 * Nerve against nerve and side against side, where a limit was looked for. A comparison whose counterpart is
 * missing says so; one that no set judges is left to the tables above.
 */
export const comparisons: ReportSection<ReportSource> = {
  id: 'comparisons',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const rows = snapshot.assessment.comparisons.flatMap((comparison) => {
      const judged = comparison.results.some(isJudged)
      const shown = comparison.results.filter(result => isJudged(result) || (result.value.kind === 'not-computable' && (judged || !comparison.id.startsWith('side-difference'))))
      return shown.map((result, index) => resultRow(named(comparison.side ?? result.side, result.label, words), result, words, index === 0))
    })
    return rows.length > 0 ? [heading(2, words.comparisons, 'comparisons'), table(words.comparisons, words.columns.comparison, rows, words)] : []
  },
}

const tabled: RunKind[] = ['motor', 'sensory', 'mixed', 'f-wave', 'h-reflex', 'repetitive', 'blink']

function rowsOfKind(kind: RunKind, runs: FrozenRun[], words: ReportWords): TableBlock['rows'] {
  const shown = columnsOf(kind, runs)
  return runs.flatMap(({ assessment }) => assessment.results
    .filter(result => isJudged(result) && !shown.includes(result.quantity))
    .map((result, index) => resultRow(`${assessment.title}: ${result.label}`, result, words, index === 0)))
}

/** Computed values that were judged and have no column of their own: falls between sites, drops of velocity. */
export const derived: ReportSection<ReportSource> = {
  id: 'derived',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const rows = tabled.flatMap(kind => rowsOfKind(kind, runsOf(snapshot, [kind]), words))
    return rows.length > 0 ? [heading(2, words.derived, 'derived'), table(words.derived, words.columns.computed, rows, words)] : []
  },
}
