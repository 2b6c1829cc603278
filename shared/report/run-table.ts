import type { Result } from '../calculations/types'
import { quantities } from '../catalogue/quantities'
import type { RunKind } from '../catalogue/types'
import { absenceLabels, type RunRow } from '../schemas/study'
import { paragraph, plainCell, withSides, type Block, type Cell, type TableBlock, type TextCell } from './blocks'
import { barCell, limitsCell, tableNotes, valueCell, type TableNotes } from './limits'
import { runsOf, shortRunName, type FrozenRun, type ReportSource } from './source'
import type { ReportWords } from './words'

/** Columns of the kinds that every report prints the same way; a column in brackets appears only when something stands in it. */
const fixedColumns: Partial<Record<RunKind, { always: string[], ifPresent: string[] }>> = {
  'motor': { always: ['latencyMs', 'amplitudeMv', 'distanceMm', 'velocityMps'], ifPresent: ['durationMs', 'areaMvMs'] },
  'sensory': { always: ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'distanceMm', 'velocityMps'], ifPresent: ['durationMs'] },
  'f-wave': { always: ['minimumLatencyMs', 'persistencePercent'], ifPresent: ['stimulusCount', 'responseCount', 'meanLatencyMs', 'maximumLatencyMs', 'chronodispersionMs'] },
  'mixed': { always: ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'distanceMm', 'velocityMps'], ifPresent: ['durationMs'] },
}
/** Printing order; a quantity that is not here keeps the order of the results. */
const order = ['stimulusCount', 'responseCount', 'latencyMs', 'onsetLatencyMs', 'peakLatencyMs', 'amplitudeMv', 'amplitudeUv', 'durationMs', 'areaMvMs', 'distanceMm', 'velocityMps', 'minimumLatencyMs', 'meanLatencyMs', 'maximumLatencyMs', 'chronodispersionMs', 'persistencePercent']
const place = (quantity: string) => order.includes(quantity) ? order.indexOf(quantity) : order.length
const mostColumns = 6

const hasSomething = (result: Result) => result.value.kind !== 'not-computable'

/** The quantities that a table of these runs shows, in printing order. */
export function columnsOf(kind: RunKind, runs: readonly FrozenRun[]): string[] {
  const present = [...new Set(runs.flatMap(({ assessment }) => assessment.results.filter(hasSomething).map(result => result.quantity)))]
  const fixed = fixedColumns[kind]
  const chosen = fixed ? [...fixed.always, ...fixed.ifPresent.filter(quantity => present.includes(quantity))] : present.slice(0, mostColumns)
  return chosen.map((quantity, index) => ({ quantity, index })).sort((a, b) => place(a.quantity) - place(b.quantity) || a.index - b.index).map(item => item.quantity)
}

/** "latency, ms"; the name of a computed quantity comes from its first result. */
function columnLabel(quantity: string, runs: readonly FrozenRun[], words: ReportWords): string {
  const known = quantity in quantities ? quantities[quantity as keyof typeof quantities] : undefined
  const example = runs.flatMap(({ assessment }) => assessment.results).find(result => result.quantity === quantity)
  const label = words.columnHead(known?.label ?? example?.label.split(/,| at /)[0] ?? quantity)
  const unit = known?.unit ?? example?.unit ?? ''
  return unit ? `${label}, ${unit}` : label
}

/** The results of one row; what belongs to the whole run stands in its first row. */
function resultsOfRow({ assessment }: FrozenRun, row: RunRow, first: boolean): Result[] {
  return assessment.results.filter(result => result.rowId === row.id || (first && !result.rowId))
}

/** The side stands in every row: a row at the head of a page must not depend on the page before. */
function nameCell(frozen: FrozenRun, first: boolean, words: ReportWords): TextCell {
  const name = `${words.sides[frozen.run.side]} ${shortRunName(frozen, words)}`
  if (!first) return { words: [{ text: name, faint: true }] }
  return { words: withSides(name), ...(frozen.assessment.supersededBy ? { below: words.superseded } : {}) }
}

/** The results that a row shows, column by column. */
function shownIn(frozen: FrozenRun, row: RunRow, index: number, columns: string[]): (Result | undefined)[] {
  const results = resultsOfRow(frozen, row, index === 0)
  return columns.map(quantity => results.find(result => result.quantity === quantity))
}
const present = (results: readonly (Result | undefined)[]): Result[] => results.filter(result => result !== undefined)

function tableRow(frozen: FrozenRun, row: RunRow, index: number, columns: string[], words: ReportWords, notes: TableNotes): TableBlock['rows'][number] {
  const shown = shownIn(frozen, row, index, columns)
  const cells: Cell[] = [
    nameCell(frozen, index === 0, words),
    ...siteCell(frozen, row, words),
    ...shown.map(result => valueCell(result, words)),
    barCell(present(shown), words),
    limitsCell(present(shown), words, notes),
  ]
  return { cells, first: index === 0, struck: Boolean(frozen.assessment.supersededBy), runId: frozen.run.id }
}

/** Kinds stimulated at one site say it in the nerve's name; the others have a column for it. */
const hasSiteColumn = (kind: RunKind) => kind !== 'sensory' && kind !== 'mixed'
function siteCell({ technique }: FrozenRun, row: RunRow, words: ReportWords): Cell[] {
  return hasSiteColumn(technique.kind) ? [plainCell(words.say(technique.sites.find(site => site.id === row.site)?.label ?? row.site))] : []
}

/**
 * One table of all runs of a kind, nerve by nerve, with limits and limit bars, and below it what its limits are; nothing
 * when there is no such run. A blank cell was not measured; a response that was looked for and not found reads
 * "no response".
 */
export function runTable(source: ReportSource, kind: RunKind, caption: string, words: ReportWords): Block[] {
  const runs = runsOf(source.snapshot, [kind])
  if (runs.length === 0) return []
  const columns = columnsOf(kind, runs)
  const notes = tableNotes(runs.flatMap(frozen => frozen.run.rows.map((row, index) => present(shownIn(frozen, row, index, columns)))), words)
  const table: TableBlock = {
    kind: 'table',
    caption,
    columns: [
      { label: words.columns.nerve, align: 'left', wide: true },
      ...(hasSiteColumn(kind) ? [{ label: words.columns.site, align: 'left' as const }] : []),
      ...columns.map(quantity => ({ label: columnLabel(quantity, runs, words), align: 'right' as const })),
      { label: '', align: 'bar' },
      { label: words.columns.limits, align: 'right' },
    ],
    rows: runs.flatMap(frozen => frozen.run.rows.map((row, index) => tableRow(frozen, row, index, columns, words, notes))),
  }
  return [table, ...seriesBlocks(runs, words), ...notes.blocks]
}

/** The single responses that a row of late responses or a train was computed from, as they were typed. */
function seriesBlocks(runs: readonly FrozenRun[], words: ReportWords): Block[] {
  const said = runs.filter(({ assessment }) => !assessment.supersededBy).flatMap(frozen => frozen.run.rows.filter(row => row.series?.length).map((row) => {
    const site = frozen.technique.sites.find(one => one.id === row.site)?.label ?? row.site
    const unit = frozen.technique.kind === 'f-wave' ? 'ms' : 'mV'
    return `${words.sides[frozen.run.side]} ${shortRunName(frozen, words)}, ${words.say(site)}: ${row.series!.map(entry => typeof entry === 'number' ? String(entry) : words.say(absenceLabels[entry])).join(', ')} ${unit}`
  }))
  return said.length > 0 ? [paragraph([{ text: `${words.singleResponses}. `, strong: true }, ...withSides(`${said.join('; ')}.`)], 'faint')] : []
}
