import type { Content, ContentTable, CustomTableLayout, TableCell } from 'pdfmake/interfaces'
import type { BarCell, Cell, TableBlock, TextCell, Words } from '#shared/report/blocks'
import { markSigns, plainText } from '#shared/report/blocks'
import { limitBarSvg } from '#shared/plots/limit-bar'
import type { Drawing } from './drawing'
import { printable } from './glyphs'
import { addTag, type Tag } from './structure'
import { ink, size, type Spacing } from './style'

const barWidth = 54
/** Numbers, pairs of limits and "no response" stay on one line; sentences may wrap. */
const isShort = (text: string) => text.length <= 14 || (text.length <= 30 && /\d/.test(text))
/** So does "below fibular head" beside the nerve; the nerve itself may take two lines, or the numbers would have no room. */
const longestSite = 20
const staysWhole = (text: string, align: 'left' | 'right', index: number) => align === 'right' ? isShort(text) : index > 0 && text.length <= longestSite

/** Words as pdfmake takes them: weight, colour, the element they belong to, and nothing that the typeface cannot draw. */
export function runs(words: readonly Words[], tag: Tag, colour = ink.ink) {
  return words.map(part => ({ text: printable(part.text), bold: part.strong ?? false, color: part.faint ? ink.faint : colour, tag }))
}
/** Text of one weight as part of an element. */
export const tagged = (text: string, tag: Tag) => [{ text: printable(text), tag }]

/** Outside is an arrow, a weight and a colour together: each alone survives a photocopy or a colour-blind eye. */
function markColour({ mark, doubtful }: TextCell): string {
  if (doubtful) return ink.doubt
  if (mark === 'cold') return ink.cold
  return mark && mark !== 'near' ? ink.beyond : ink.ink
}

function textCell(cell: TextCell, tag: Tag, index: number, align: 'left' | 'right', struck: boolean): TableCell {
  const colour = struck ? ink.faint : markColour(cell)
  const sign = cell.mark && !struck ? [{ text: printable(`${markSigns[cell.mark]} `), bold: cell.mark !== 'near', color: colour, tag }] : []
  const main = { text: [...sign, ...runs(cell.words, tag, colour)], alignment: align, noWrap: staysWhole(plainText(cell.words), align, index), ...(struck ? { decoration: 'lineThrough' as const } : {}) }
  return cell.below ? { stack: [main, { text: tagged(` ${cell.below}`, tag), fontSize: size.footer, color: ink.faint, alignment: align }] } : main
}

function barCell({ bar, text }: BarCell, tag: Tag): TableCell {
  return { svg: limitBarSvg(bar, { width: barWidth, colours: ink }), width: barWidth, margin: [0, 1, 0, 0], tag: addTag(tag, 'Figure', { alt: printable(text) }) }
}

/** The first cell of a row says what the row is about: it is the head of the row. */
function tableCell(cell: Cell | undefined, row: Tag, index: number, align: 'left' | 'right' | 'bar', struck: boolean): TableCell {
  const tag = index === 0 ? addTag(row, 'TH', { scope: 'Row' }) : addTag(row, 'TD')
  if (!cell) return ''
  return 'bar' in cell ? barCell(cell, tag) : textCell(cell, tag, index, align === 'bar' ? 'left' : align, struck)
}

/** Heads repeated on later pages are artefacts there. A column of bars has no printed head, but a name. */
function headCell(column: TableBlock['columns'][number], row: Tag, index: number, barName: string): TableCell {
  const tag = addTag(row, 'TH', { scope: 'Column', once: true, ...(column.label ? {} : { alt: barName }) })
  return { text: tagged(column.label, tag), color: ink.faint, noWrap: index === 0, alignment: column.align === 'bar' ? 'left' : column.align }
}

/** Rules between nerves, none inside one; no vertical lines. */
function layoutOf(table: TableBlock, { cell }: Spacing): CustomTableLayout {
  const startsNerve = (line: number) => table.rows[line - 1]?.first ?? true
  return {
    hLineWidth: line => line === 0 ? 0 : line === 1 || startsNerve(line) ? 0.6 : 0,
    vLineWidth: () => 0,
    hLineColor: () => ink.rule,
    paddingLeft: column => column === 0 ? 0 : 3.5,
    paddingRight: column => column === table.columns.length - 1 ? 0 : 3.5,
    paddingTop: () => cell,
    paddingBottom: () => cell,
  }
}

/** The names take what the numbers leave. */
function widthOf(column: TableBlock['columns'][number]): 'auto' | '*' | number {
  if (column.align === 'bar') return barWidth
  return column.wide ? '*' : 'auto'
}

/** So many columns need smaller letters and heads of two lines, or the last one leaves the page. */
const manyColumns = 9

/** A table with its head repeated on every page; a row is never cut. */
export function renderTable(table: TableBlock, parent: Tag, { words, spacing }: Drawing): Content {
  const isWide = table.columns.length >= manyColumns
  const tag = addTag(parent, 'Table', { title: printable(table.caption) })
  const headRow = addTag(tag, 'TR')
  const head = table.columns.map((column, index) => headCell(column, headRow, index, words.columns.bar))
  const body = table.rows.map((row) => {
    const rowTag = addTag(tag, 'TR')
    return table.columns.map((column, index) => tableCell(row.cells[index], rowTag, index, column.align, row.struck))
  })
  const content: ContentTable = {
    table: {
      headerRows: 1,
      keepWithHeaderRows: 1,
      dontBreakRows: true,
      widths: table.columns.map(widthOf),
      body: [head, ...body],
    },
    layout: layoutOf(table, spacing),
    fontSize: isWide ? size.wideTable : size.table,
    margin: [0, 0, 0, 4],
  }
  return content
}
