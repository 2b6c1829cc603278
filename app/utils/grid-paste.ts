import { quantityOf } from '#shared/catalogue/quantities'
import type { Technique } from '#shared/catalogue/types'
import type { Run } from '#shared/schemas/study'
import type { GridColumn } from './grid-columns'
import { entryText, parseEntry, parseSeries, seriesText } from './grid-entry'
import { entryPlace, rowLabel } from './run-labels'
import { cellContent, type CellContent } from './study-edits'

/** One pasted cell, as the preview names it before anything is stored. */
export interface PasteCell { rowId: string, field: string, row: string, column: string, unit: string, text: string, before: string, content: CellContent, problem: string }
export interface PastePlan { cells: PasteCell[], /** "1 row and 2 columns did not fit and are left out." */ leftOut: string }

/** A block as spreadsheets put it on the clipboard: tabs and line ends. Null for a single value. */
export function parseBlock(text: string): string[][] | null {
  const lines = text.replace(/\r\n?/g, '\n').replace(/\n$/, '').split('\n')
  const block = lines.map(line => line.split('\t').map(cell => cell.trim()))
  return block.length > 1 || (block[0]?.length ?? 0) > 1 ? block : null
}

function read(text: string, column: GridColumn, technique: Technique, run: Run, rowIndex: number): { content: CellContent, problem: string } {
  if (column.kind === 'ordinal') return text === '' || column.choices.includes(text) ? { content: text || null, problem: '' } : { content: null, problem: `"${text}" is no step of this scale.` }
  if (column.kind === 'series') {
    const parsed = parseSeries(text, quantityOf(column.quantity))
    return parsed.kind === 'series' ? { content: parsed.entries, problem: '' } : { content: null, problem: parsed.sentence }
  }
  const parsed = parseEntry(text, quantityOf(column.quantity), entryPlace(technique, run, rowIndex))
  return parsed.kind === 'stop' ? { content: null, problem: parsed.sentence } : { content: parsed.kind === 'entry' ? parsed.entry : null, problem: '' }
}

const count = (many: number, word: string) => `${many} ${word}${many === 1 ? '' : 's'}`

function leftOutWords(rowsOver: number, columnsOver: number): string {
  const [rows, columns] = [Math.max(0, rowsOver), Math.max(0, columnsOver)]
  const parts = [rows > 0 ? count(rows, 'row') : '', columns > 0 ? count(columns, 'column') : ''].filter(Boolean)
  return parts.length > 0 ? `${parts.join(' and ')} did not fit into this run and ${rows + columns === 1 ? 'is' : 'are'} left out.` : ''
}

/**
 * What a pasted block would put where. Stays inside the run; blanks of the block leave their cells alone; a value that
 * cannot be right is named with its sentence and left out.
 */
export function planPaste(block: string[][], at: { rowIndex: number, columnIndex: number }, technique: Technique, run: Run, columns: GridColumn[]): PastePlan {
  const cells = block.flatMap((line, down) => line.flatMap((text, across): PasteCell[] => {
    const row = run.rows[at.rowIndex + down]
    const column = columns[at.columnIndex + across]
    if (!row || !column || text === '') return []
    const before = cellContent(row, column.field)
    return [{
      rowId: row.id, field: column.field, row: rowLabel(technique, row), column: column.label, unit: column.unit, text,
      before: Array.isArray(before) ? before.map(entry => entryText(entry)).join(' ') : entryText(before as never),
      ...read(text, column, technique, run, at.rowIndex + down),
    }]
  }))
  const widest = Math.max(...block.map(line => line.length))
  return { cells, leftOut: leftOutWords(at.rowIndex + block.length - run.rows.length, at.columnIndex + widest - columns.length) }
}

/** A block of cells as text for a spreadsheet: tabs and line ends, absences in words. */
export function blockText(run: Run, columns: GridColumn[], from: { rowIndex: number, columnIndex: number }, to: { rowIndex: number, columnIndex: number }): string {
  const [top, bottom] = [from.rowIndex, to.rowIndex].sort((a, b) => a - b) as [number, number]
  const [left, right] = [from.columnIndex, to.columnIndex].sort((a, b) => a - b) as [number, number]
  return run.rows.slice(top, bottom + 1).map(row => columns.slice(left, right + 1).map((column) => {
    const content = cellContent(row, column.field)
    return Array.isArray(content) ? seriesText(content) : entryText(content as never)
  }).join('\t')).join('\n')
}
