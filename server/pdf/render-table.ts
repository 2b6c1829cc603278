import type { Content, ContentTable, CustomTableLayout, TableCell } from 'pdfmake/interfaces'
import type { Cell, TableBlock, TextCell, Words } from '#shared/report/blocks'
import { markSigns, plainText } from '#shared/report/blocks'
import { limitBarSvg } from '#shared/plots/limit-bar'
import { printable } from './glyphs'
import { ink, size } from './style'

const barWidth = 54
/** Numbers and pairs of limits stay on one line; words ("no response") and sentences may wrap. */
const isShort = (text: string) => text.length <= 30 && /\d/.test(text)
/** "nerve, recorded from" and "amplitude, mV" stay whole; longer heads take two lines. */
const longestHead = 20

/** Words as pdfmake takes them: weight, colour, and nothing that the typeface cannot draw. */
export function runs(words: readonly Words[], colour = ink.ink) {
  return words.map(part => ({ text: printable(part.text), bold: part.strong ?? false, color: part.faint ? ink.faint : colour }))
}

/** Outside is an arrow, a weight and a colour together: each alone survives a photocopy or a colour-blind eye. */
function markColour({ mark, doubtful }: TextCell): string {
  if (doubtful) return ink.doubt
  if (mark === 'cold') return ink.cold
  return mark && mark !== 'near' ? ink.beyond : ink.ink
}

function textCell(cell: TextCell, align: 'left' | 'right', struck: boolean): TableCell {
  const colour = struck ? ink.faint : markColour(cell)
  const sign = cell.mark && !struck ? [{ text: printable(`${markSigns[cell.mark]} `), bold: cell.mark !== 'near', color: colour }] : []
  const main = { text: [...sign, ...runs(cell.words, colour)], alignment: align, noWrap: align === 'right' && isShort(plainText(cell.words)), ...(struck ? { decoration: 'lineThrough' as const } : {}) }
  return cell.below ? { stack: [main, { text: printable(cell.below), fontSize: size.footer, color: ink.faint, alignment: align }] } : main
}

function tableCell(cell: Cell | undefined, align: 'left' | 'right' | 'bar', struck: boolean): TableCell {
  if (!cell) return ''
  if ('bar' in cell) return { svg: limitBarSvg(cell.bar, { width: barWidth, colours: ink }), width: barWidth, margin: [0, 1, 0, 0] }
  return textCell(cell, align === 'bar' ? 'left' : align, struck)
}

/** Rules between nerves, none inside one; no vertical lines. */
function layoutOf(table: TableBlock): CustomTableLayout {
  const startsNerve = (line: number) => table.rows[line - 1]?.first ?? true
  return {
    hLineWidth: line => line === 0 ? 0 : line === 1 || startsNerve(line) ? 0.6 : 0,
    vLineWidth: () => 0,
    hLineColor: () => ink.rule,
    paddingLeft: column => column === 0 ? 0 : 4,
    paddingRight: () => 4,
    paddingTop: () => 1.6,
    paddingBottom: () => 1.6,
  }
}

function widthOf(column: TableBlock['columns'][number], isLast: boolean): 'auto' | '*' | number {
  if (column.align === 'bar') return barWidth
  return isLast ? '*' : 'auto'
}

/** So many columns need smaller letters and heads of two lines, or the last one leaves the page. */
const manyColumns = 9

/** A table with its head repeated on every page; a row is never cut. */
export function renderTable(table: TableBlock): Content {
  const isWide = table.columns.length >= manyColumns
  const head = table.columns.map((column): TableCell => ({ text: printable(column.label), color: ink.faint, noWrap: (!isWide || column.label.includes('/')) && column.label.length <= longestHead, alignment: column.align === 'bar' ? 'left' : column.align }))
  const body = table.rows.map(row => table.columns.map((column, index) => tableCell(row.cells[index], column.align, row.struck)))
  const content: ContentTable = {
    table: {
      headerRows: 1,
      keepWithHeaderRows: 1,
      dontBreakRows: true,
      widths: table.columns.map((column, index) => widthOf(column, index === table.columns.length - 1)),
      body: [head, ...body],
    },
    layout: layoutOf(table),
    fontSize: isWide ? size.wideTable : size.table,
    margin: [0, 0, 0, 4],
  }
  return content
}
