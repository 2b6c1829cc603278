import type { Result } from '../calculations/types'
import { quantities } from '../catalogue/quantities'
import type { RunKind } from '../catalogue/types'
import type { RunRow } from '../schemas/study'
import { emptyCell, plainCell, withSides, type Cell, type TableBlock, type TextCell } from './blocks'
import { allRecalled, barCell, limitsCell, valueCell } from './limits'
import { runsOf, shortRunName, type FrozenRun, type ReportSource } from './source'
import type { ReportWords } from './words'

/** Columns of the kinds that every report prints the same way; a column in brackets appears only when something stands in it. */
const fixedColumns: Partial<Record<RunKind, { always: string[], ifPresent: string[] }>> = {
  motor: { always: ['latencyMs', 'amplitudeMv', 'distanceMm', 'velocityMps'], ifPresent: ['durationMs', 'areaMvMs'] },
  sensory: { always: ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'distanceMm', 'velocityMps'], ifPresent: ['durationMs'] },
  mixed: { always: ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'distanceMm', 'velocityMps'], ifPresent: ['durationMs'] },
}
/** Printing order; a quantity that is not here keeps the order of the results. */
const order = ['latencyMs', 'onsetLatencyMs', 'peakLatencyMs', 'amplitudeMv', 'amplitudeUv', 'durationMs', 'areaMvMs', 'distanceMm', 'velocityMps']
const place = (quantity: string) => order.includes(quantity) ? order.indexOf(quantity) : order.length
const mostColumns = 8

const hasSomething = (result: Result) => result.value.kind !== 'not-computable'

/** The quantities that a table of these runs shows, in printing order. */
export function columnsOf(kind: RunKind, runs: readonly FrozenRun[]): string[] {
  const present = [...new Set(runs.flatMap(({ assessment }) => assessment.results.filter(hasSomething).map(result => result.quantity)))]
  const fixed = fixedColumns[kind]
  const chosen = fixed ? [...fixed.always, ...fixed.ifPresent.filter(quantity => present.includes(quantity))] : present.slice(0, mostColumns)
  return chosen.map((quantity, index) => ({ quantity, index })).sort((a, b) => place(a.quantity) - place(b.quantity) || a.index - b.index).map(item => item.quantity)
}

/** "latency, ms"; the name of a computed quantity comes from its first result. */
function columnLabel(quantity: string, runs: readonly FrozenRun[]): string {
  const known = quantity in quantities ? quantities[quantity as keyof typeof quantities] : undefined
  const example = runs.flatMap(({ assessment }) => assessment.results).find(result => result.quantity === quantity)
  const label = known?.label ?? example?.label.split(/,| at /)[0] ?? quantity
  const unit = known?.unit ?? example?.unit ?? ''
  return unit ? `${label}, ${unit}` : label
}

/** The results of one row; what belongs to the whole run stands in its first row. */
function resultsOfRow({ assessment }: FrozenRun, row: RunRow, first: boolean): Result[] {
  return assessment.results.filter(result => result.rowId === row.id || (first && !result.rowId))
}

function nameCell(frozen: FrozenRun, words: ReportWords): TextCell {
  const name = `${words.sides[frozen.run.side]} ${shortRunName(frozen)}`
  return { words: withSides(name), ...(frozen.assessment.supersededBy ? { below: words.superseded } : {}) }
}

function tableRow(frozen: FrozenRun, row: RunRow, index: number, columns: string[], words: ReportWords, sayRecalled: boolean): TableBlock['rows'][number] {
  const results = resultsOfRow(frozen, row, index === 0)
  const shown = columns.map(quantity => results.find(result => result.quantity === quantity))
  const judged = shown.filter(result => result !== undefined)
  const cells: Cell[] = [
    index === 0 ? nameCell(frozen, words) : emptyCell,
    ...siteCell(frozen, row),
    ...shown.map(valueCell),
    barCell(judged),
    limitsCell(judged, words, sayRecalled),
  ]
  return { cells, first: index === 0, struck: Boolean(frozen.assessment.supersededBy), runId: frozen.run.id }
}

/** Kinds stimulated at one site say it in the nerve's name; the others have a column for it. */
const hasSiteColumn = (kind: RunKind) => kind !== 'sensory' && kind !== 'mixed'
function siteCell({ technique }: FrozenRun, row: RunRow): Cell[] {
  return hasSiteColumn(technique.kind) ? [plainCell(technique.sites.find(site => site.id === row.site)?.label ?? row.site)] : []
}

/**
 * One table of all runs of a kind, nerve by nerve, with limits and limit bars; null when there is none.
 * A blank cell was not measured; a response that was looked for and not found reads "no response".
 */
export function runTable(source: ReportSource, kind: RunKind, caption: string, words: ReportWords): { table: TableBlock, allRecalled: boolean } | null {
  const runs = runsOf(source.snapshot, [kind])
  if (runs.length === 0) return null
  const columns = columnsOf(kind, runs)
  const recalled = allRecalled(runs.flatMap(({ assessment }) => assessment.results))
  return {
    allRecalled: recalled,
    table: {
      kind: 'table',
      caption,
      columns: [
        { label: words.columns.nerve, align: 'left', wide: true },
        ...(hasSiteColumn(kind) ? [{ label: words.columns.site, align: 'left' as const }] : []),
        ...columns.map(quantity => ({ label: columnLabel(quantity, runs), align: 'right' as const })),
        { label: '', align: 'bar' },
        { label: words.columns.limits, align: 'right' },
      ],
      rows: runs.flatMap(frozen => frozen.run.rows.map((row, index) => tableRow(frozen, row, index, columns, words, !recalled))),
    },
  }
}
