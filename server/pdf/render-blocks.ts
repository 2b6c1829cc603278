import type { Content } from 'pdfmake/interfaces'
import { travelPlotGeometry } from '#shared/plots/travel-plot'
import { travelPlotSvg } from '#shared/plots/travel-plot-svg'
import { withSides, type Block, type FigureBlock, type KeyValueBlock, type NoteBlock, type ParagraphBlock } from '#shared/report/blocks'
import type { ReportSnapshot } from '#shared/schemas/report'
import { printable } from './glyphs'
import { renderTable, runs } from './render-table'
import { ink, lineWidth, size } from './style'

/** Marks a heading for `keepHeadings`: it never stands alone at the foot of a page. Plots need more room than a row. */
export const headlineLevels = { rows: 1, plots: 2 } as const

function renderParagraph({ words, tone }: ParagraphBlock): Content {
  if (tone === 'lead') return { text: runs(words), fontSize: size.lead, margin: [0, 0, 0, 2] }
  return { text: runs(words, tone === 'faint' ? ink.faint : ink.ink), fontSize: tone === 'faint' ? size.small : size.body, margin: [0, 0, 0, tone === 'faint' ? 2 : 1.5] }
}

/** A thick rule at the left of what must not be overlooked. */
function barred(stack: Content[], width: number, colour: string): Content {
  return {
    table: { widths: ['*'], body: [[{ stack }]], dontBreakRows: true },
    layout: {
      hLineWidth: () => 0,
      vLineWidth: line => line === 0 ? width : 0,
      vLineColor: () => colour,
      paddingLeft: () => 8, paddingRight: () => 0, paddingTop: () => 1.5, paddingBottom: () => 1.5,
    },
  }
}

function renderNote({ tone, words }: NoteBlock): Content {
  const text: Content = { text: runs(words, tone === 'warning' ? ink.ink : ink.faint), fontSize: tone === 'warning' ? size.body : size.small, bold: tone === 'warning' }
  return tone === 'warning' ? { stack: [barred([text], 3, ink.beyond)], margin: [0, 2, 0, 4] } : { ...text, margin: [0, 1, 0, 3] }
}

/** Two pairs of label and text beside each other, read across. */
function renderKeyValue({ items }: KeyValueBlock): Content {
  const cells = items.map(item => [{ text: printable(item.label), color: ink.faint }, { text: runs(item.words) }])
  const rows = Array.from({ length: Math.ceil(cells.length / 2) }, (_, row) => [...cells[2 * row]!, ...(cells[2 * row + 1] ?? ['', ''])])
  return {
    table: { widths: [46, '*', 56, '*'], body: rows },
    layout: { hLineWidth: () => 0, vLineWidth: () => 0, paddingLeft: () => 0, paddingRight: () => 8, paddingTop: () => 1, paddingBottom: () => 1 },
    fontSize: size.body,
    margin: [0, 0, 0, 6],
  }
}

/** Above a plot the side and nerve are enough: the muscle stands in the table. */
const shortTitle = (title: string) => title.split(', ')[0] ?? title

const gap = 12
/** Long names of sites need wide plots. */
const longestLabel = 14

function plotsInRow(figures: FigureBlock[], snapshot: ReportSnapshot): 2 | 3 {
  const labels = figures.flatMap(({ runId }) => {
    const run = snapshot.study.runs.find(candidate => candidate.id === runId)
    const technique = snapshot.techniques.find(candidate => candidate.id === run?.technique)
    return run?.rows.map(row => technique?.sites.find(site => site.id === row.site)?.label ?? '') ?? []
  })
  return labels.some(label => label.length > longestLabel) ? 2 : 3
}

/** Units of a plot for each point on paper: its text is then as small as a footnote. */
const plotScale = 1.42
const plotHeight = 164

function drawFigure(figure: FigureBlock, snapshot: ReportSnapshot, width: number): Content {
  const run = snapshot.study.runs.find(candidate => candidate.id === figure.runId)
  const assessment = snapshot.assessment.runs.find(candidate => candidate.runId === figure.runId)
  const technique = snapshot.techniques.find(candidate => candidate.id === run?.technique)
  const superseded = new Set(snapshot.assessment.runs.filter(candidate => candidate.supersededBy).map(candidate => candidate.runId))
  const other = snapshot.study.runs.find(candidate => candidate.technique === run?.technique && candidate.side !== run?.side && candidate.rows.length > 1 && !superseded.has(candidate.id))
  const plot = run && technique ? travelPlotGeometry(run, assessment, technique, other ? { run: other } : undefined, { width: width * plotScale, height: plotHeight }) : null
  if (!plot) return { text: printable(figure.text), fontSize: size.small }
  return { stack: [{ text: runs(withSides(shortTitle(figure.title))), fontSize: size.small, margin: [0, 0, 0, 2] }, { svg: printable(travelPlotSvg(plot, ink)), width }] }
}

/** Plots in rows; a row is never cut. */
function renderFigures(figures: FigureBlock[], snapshot: ReportSnapshot): Content {
  const inRow = plotsInRow(figures, snapshot)
  const width = (lineWidth(snapshot.organisation.paperSize) - gap * (inRow - 1)) / inRow
  const drawn = figures.map(figure => drawFigure(figure, snapshot, width))
  const rows = Array.from({ length: Math.ceil(drawn.length / inRow) }, (_, row) => drawn.slice(row * inRow, (row + 1) * inRow))
  return { stack: rows.map((columns): Content => ({ columns: columns.map(column => ({ width, stack: [column] })), columnGap: gap, unbreakable: true, margin: [0, 0, 0, 6] })) }
}

function renderHeading(level: number, text: string, headlineLevel: number): Content {
  return { text: printable(text), bold: true, fontSize: level === 2 ? size.heading : size.body, color: ink.ink, headlineLevel, margin: [0, 7, 0, 2] }
}

/**
 * Blocks that belong together, as pdfmake content. A heading with lead paragraphs stands behind one thick rule, so
 * that the answer is seen first.
 */
export function renderBlocks(blocks: readonly Block[], snapshot: ReportSnapshot): Content[] {
  const [first, ...rest] = blocks
  const isLead = (block: Block) => block.kind === 'paragraph' && block.tone === 'lead'
  if (first?.kind !== 'heading' || rest.length === 0 || !rest.every(isLead)) return blocks.map((block, index) => block.kind === 'heading' ? renderHeading(block.level, block.text, levelBefore(blocks[index + 1])) : renderBlock(block, snapshot))
  const title: Content = { text: printable(first.text), bold: true, fontSize: size.lead, margin: [0, 0, 0, 2] }
  return [{ stack: [barred([title, ...rest.map(block => renderBlock(block, snapshot))], 3, ink.ink)], margin: [0, 6, 0, 2] }]
}

const levelBefore = (next: Block | undefined) => next?.kind === 'figures' || next?.kind === 'figure' ? headlineLevels.plots : headlineLevels.rows

/** One block as pdfmake content. Knows nothing of sections. */
function renderBlock(block: Block, snapshot: ReportSnapshot): Content {
  switch (block.kind) {
    case 'heading': return renderHeading(block.level, block.text, headlineLevels.rows)
    case 'paragraph': return renderParagraph(block)
    case 'keyValue': return renderKeyValue(block)
    case 'table': return renderTable(block)
    case 'figure': return renderFigures([block], snapshot)
    case 'figures': return renderFigures(block.figures, snapshot)
    case 'note': return renderNote(block)
  }
}
