import type { Content } from 'pdfmake/interfaces'
import { travelPlotGeometry } from '#shared/plots/travel-plot'
import { travelPlotSvg } from '#shared/plots/travel-plot-svg'
import { withSides, type Block, type FigureBlock, type HeadingBlock, type KeyValueBlock, type NoteBlock, type ParagraphBlock } from '#shared/report/blocks'
import { techniqueIn } from '#shared/report/source'
import type { Drawing } from './drawing'
import { printable } from './glyphs'
import { renderTable, runs, tagged } from './render-table'
import { addTag, type Tag } from './structure'
import { ink, lineWidth, size } from './style'

/** Marks a heading for `keepHeadings`: it never stands alone at the foot of a page. Plots need more room than a row. */
export const headlineLevels = { rows: 1, plots: 2 } as const

function renderParagraph({ words, tone }: ParagraphBlock, parent: Tag, { spacing }: Drawing): Content {
  const tag = addTag(parent, 'P')
  if (tone === 'lead') return { text: runs(words, tag), fontSize: size.lead, margin: [0, 0, 0, 2] }
  return { text: runs(words, tag, tone === 'faint' ? ink.faint : ink.ink), fontSize: tone === 'faint' ? spacing.small : size.body, margin: [0, 0, 0, tone === 'faint' ? spacing.paragraph : spacing.paragraph * 0.75] }
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

function renderNote({ tone, words }: NoteBlock, parent: Tag, { spacing }: Drawing): Content {
  const text: Content = { text: runs(words, addTag(parent, 'P'), tone === 'warning' ? ink.ink : ink.faint), fontSize: tone === 'warning' ? size.body : spacing.small, bold: tone === 'warning' }
  return tone === 'warning' ? { stack: [barred([text], 3, ink.beyond)], margin: [0, 2, 0, 4] } : { ...text, margin: [0, 1, 0, 3] }
}

function renderItem({ label, words }: KeyValueBlock['items'][number], list: Tag): [Content, Content] {
  const item = addTag(list, 'LI')
  return [{ text: tagged(label, addTag(item, 'Lbl')), color: ink.faint }, { text: runs(words, addTag(item, 'LBody')) }]
}

/** Two pairs of label and text beside each other, read across; a list to whoever has it read. */
function renderKeyValue({ items }: KeyValueBlock, parent: Tag): Content {
  const list = addTag(parent, 'L')
  const cells = items.map(item => renderItem(item, list))
  const rows = Array.from({ length: Math.ceil(cells.length / 2) }, (_, row) => [...cells[2 * row]!, ...(cells[2 * row + 1] ?? ['', ''])])
  return {
    table: { widths: ['auto', '*', 'auto', '*'], body: rows },
    layout: { hLineWidth: () => 0, vLineWidth: () => 0, paddingLeft: () => 0, paddingRight: () => 8, paddingTop: () => 1, paddingBottom: () => 1 },
    fontSize: size.body,
    margin: [0, 0, 0, 6],
  }
}

/** Above a plot the side and nerve are enough: the muscle stands in the table. */
const shortTitle = (title: string) => title.split(', ')[0] ?? title

const gap = 12
const inRow = 3

/** Units of a plot for each point on paper: its text is then as small as a footnote. */
const plotScale = 1.42

function drawFigure(figure: FigureBlock, { snapshot, spacing, words }: Drawing, width: number, parent: Tag): Content {
  const run = snapshot.study.runs.find(candidate => candidate.id === figure.runId)
  const assessment = snapshot.assessment.runs.find(candidate => candidate.runId === figure.runId)
  const technique = snapshot.techniques.find(candidate => candidate.id === run?.technique)
  const superseded = new Set(snapshot.assessment.runs.filter(candidate => candidate.supersededBy).map(candidate => candidate.runId))
  const other = snapshot.study.runs.find(candidate => candidate.technique === run?.technique && candidate.side !== run?.side && candidate.rows.length > 1 && !superseded.has(candidate.id))
  const plot = run && technique ? travelPlotGeometry(run, assessment, techniqueIn(words, technique), other ? { run: other } : undefined, { width: width * plotScale, height: spacing.plotHeight }) : null
  if (!plot) return { text: tagged(figure.text, addTag(parent, 'P')), fontSize: size.small }
  const title: Content = { text: runs(withSides(shortTitle(figure.title)), addTag(parent, 'P')), fontSize: size.small, margin: [0, 0, 0, 2] }
  return { stack: [title, { svg: printable(travelPlotSvg(plot, ink, words.plot.from)), width, tag: addTag(parent, 'Figure', { alt: printable(figure.text) }) }] }
}

/** Plots in rows; a row is never cut. */
function renderFigures(figures: FigureBlock[], drawing: Drawing, parent: Tag): Content {
  const width = (lineWidth(drawing.snapshot.organisation.paperSize) - gap * (inRow - 1)) / inRow
  const drawn = figures.map(figure => drawFigure(figure, drawing, width, parent))
  const rows = Array.from({ length: Math.ceil(drawn.length / inRow) }, (_, row) => drawn.slice(row * inRow, (row + 1) * inRow))
  return { stack: rows.map((columns): Content => ({ columns: columns.map(column => ({ width, stack: [column] })), columnGap: gap, unbreakable: true, margin: [0, 0, 0, 6] })) }
}

function renderHeading({ level, text }: HeadingBlock, headlineLevel: number, parent: Tag, { spacing }: Drawing): Content {
  return { text: tagged(text, addTag(parent, level === 1 ? 'H1' : level === 2 ? 'H2' : 'H3')), bold: true, fontSize: level === 2 ? size.heading : size.body, color: ink.ink, headlineLevel, margin: [0, spacing.heading, 0, 2] }
}

/**
 * Blocks that belong together, as pdfmake content and as a section of the structure tree. A heading with lead paragraphs
 * stands behind one thick rule, so that the answer is seen first.
 */
export function renderBlocks(blocks: readonly Block[], drawing: Drawing, parent: Tag): Content[] {
  const section = addTag(parent, 'Sect')
  const [first, ...rest] = blocks
  const isLead = (block: Block) => block.kind === 'paragraph' && block.tone === 'lead'
  if (first?.kind !== 'heading' || rest.length === 0 || !rest.every(isLead)) return blocks.map((block, index) => block.kind === 'heading' ? renderHeading(block, levelBefore(blocks[index + 1]), section, drawing) : renderBlock(block, drawing, section))
  const title: Content = { text: tagged(first.text, addTag(section, 'H2')), bold: true, fontSize: size.lead, margin: [0, 0, 0, 2] }
  return [{ stack: [barred([title, ...rest.map(block => renderBlock(block, drawing, section))], 3, ink.ink)], margin: [0, 6, 0, 2] }]
}

const levelBefore = (next: Block | undefined) => next?.kind === 'figures' || next?.kind === 'figure' ? headlineLevels.plots : headlineLevels.rows

/** One block as pdfmake content. Knows nothing of sections. */
function renderBlock(block: Block, drawing: Drawing, parent: Tag): Content {
  switch (block.kind) {
    case 'heading': return renderHeading(block, headlineLevels.rows, parent, drawing)
    case 'paragraph': return renderParagraph(block, parent, drawing)
    case 'keyValue': return renderKeyValue(block, parent)
    case 'table': return renderTable(block, parent, drawing)
    case 'figure': return renderFigures([block], drawing, parent)
    case 'figures': return renderFigures(block.figures, drawing, parent)
    case 'note': return renderNote(block, parent, drawing)
  }
}
