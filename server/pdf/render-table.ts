import type { Content, ContentTable, CustomTableLayout, TableCell } from 'pdfmake/interfaces'
import type { BarCell, Cell, TableBlock, TextCell, Words } from '#shared/report/blocks'
import { markSigns, plainText } from '#shared/report/blocks'
import { limitBarSvg } from '#shared/plots/limit-bar'
import type { Drawing } from './drawing'
import { printable } from './glyphs'
import { addTag, type Tag } from './structure'
import { ink, lineWidth, size, type Spacing } from './style'

const barWidth = 54
/** Numbers, pairs of limits and "no response" stay on one line; sentences may wrap. */
const isShort = (text: string) => text.length <= 14 || (text.length <= 30 && /\d/.test(text))
/** So does "below fibular head" beside the nerve; a long name of a nerve may take two lines, or the numbers would have no room. */
const longestSite = 20
const longestName = 24
/** Where a cell stands, in which column and table. */
interface Place { index: number, align: 'left' | 'right' | 'bar', struck: boolean, isWide: boolean }
const staysWhole = (text: string, { align, index, isWide }: Place) => align === 'right' ? isShort(text) : text.length <= (index > 0 ? longestSite : isWide ? 0 : longestName)

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

function textCell(cell: TextCell, tag: Tag, place: Place): TableCell {
  const { struck } = place
  const align = place.align === 'bar' ? 'left' : place.align
  const colour = struck ? ink.faint : markColour(cell)
  const sign = cell.mark && !struck ? [{ text: printable(`${markSigns[cell.mark]} `), bold: cell.mark !== 'near', color: colour, tag }] : []
  const main = { text: [...sign, ...runs(cell.words, tag, colour)], alignment: align, noWrap: staysWhole(plainText(cell.words), place), ...(struck ? { decoration: 'lineThrough' as const } : {}) }
  return cell.below ? { stack: [main, { text: tagged(` ${cell.below}`, tag), fontSize: size.footer, color: ink.faint, alignment: align }] } : main
}

function barCell({ bar, text }: BarCell, tag: Tag): TableCell {
  return { svg: limitBarSvg(bar, { width: barWidth, colours: ink }), width: barWidth, margin: [0, 1, 0, 0], tag: addTag(tag, 'Figure', { alt: printable(text) }) }
}

/** The first cell of a row says what the row is about: it is the head of the row. */
function tableCell(cell: Cell | undefined, row: Tag, place: Place): TableCell {
  const tag = place.index === 0 ? addTag(row, 'TH', { scope: 'Row' }) : addTag(row, 'TD')
  if (!cell) return ''
  return 'bar' in cell ? barCell(cell, tag) : textCell(cell, tag, place)
}

/** Heads repeated on later pages are artefacts there. A column of bars has no printed head, but a name. */
function headCell(column: TableBlock['columns'][number], row: Tag, index: number, barName: string): TableCell {
  const tag = addTag(row, 'TH', { scope: 'Column', once: true, ...(column.label ? {} : { alt: barName }) })
  const unit = column.label.lastIndexOf(', ') + 2
  const [name, unbroken] = unit > 1 ? [column.label.slice(0, unit), column.label.slice(unit)] : [column.label, '']
  return { text: [...tagged(name, tag), ...(unbroken ? [{ text: printable(unbroken), noWrap: true, tag }] : [])], color: ink.faint, noWrap: index === 0, alignment: column.align === 'bar' ? 'left' : column.align }
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

/** Width of a letter for each point of its size, a little above the mean of the typeface: enough to see what will not fit. */
const letter = 0.55
const columnGap = 7

/** The least room a column can do with, in points. */
function leastWidth(table: TableBlock, index: number): number {
  const column = table.columns[index]!
  if (column.align === 'bar') return barWidth + columnGap
  const unbroken = table.rows.flatMap(({ cells, struck }) => {
    const cell = cells[index]
    if (!cell || 'bar' in cell) return []
    const text = plainText(cell.words)
    const sign = cell.mark ? 2 : 0
    return staysWhole(text, { index, align: column.align, struck, isWide: false }) ? [text.length + sign] : text.split(' ').map(word => word.length)
  })
  const head = index === 0 ? [column.label.length] : column.label.split(' ').map(word => word.length)
  return Math.max(0, ...unbroken, ...head) * size.table * letter + columnGap
}

/** Too much for the sheet at its usual size: smaller letters then, and names in two lines. */
const isTooWide = (table: TableBlock, room: number) => table.columns.reduce((sum, _, index) => sum + leastWidth(table, index), 0) > room

/** A table with its head repeated on every page; a row is never cut. */
export function renderTable(table: TableBlock, parent: Tag, { words, spacing, snapshot }: Drawing): Content {
  const isWide = isTooWide(table, lineWidth(snapshot.organisation.paperSize))
  const tag = addTag(parent, 'Table', { title: printable(table.caption) })
  const headRow = addTag(tag, 'TR')
  const head = table.columns.map((column, index) => headCell(column, headRow, index, words.columns.bar))
  const body = table.rows.map((row) => {
    const rowTag = addTag(tag, 'TR')
    return table.columns.map((column, index) => tableCell(row.cells[index], rowTag, { index, align: column.align, struck: row.struck, isWide }))
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
