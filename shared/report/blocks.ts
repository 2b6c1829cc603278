import type { Result } from '../calculations/types'

/**
 * What a report is made of. Sections give these blocks; the page and the PDF each know how to draw them,
 * and nothing about sections. Everything here is plain JSON.
 */
export type Block = HeadingBlock | ParagraphBlock | KeyValueBlock | TableBlock | FigureBlock | FiguresBlock | NoteBlock

/** A stretch of text with one weight. */
export interface Words { text: string, strong?: boolean, faint?: boolean }

export interface HeadingBlock { kind: 'heading', level: 1 | 2 | 3, text: string, id: string }

export interface ParagraphBlock {
  kind: 'paragraph'
  words: Words[]
  /** lead: the impression, larger and with a bar at its side. faint: technique, limits, disclaimer. */
  tone: 'plain' | 'lead' | 'faint'
  /** The runs a sentence rests on, so that the page can show them. */
  runIds?: string[]
}

export interface KeyValueBlock { kind: 'keyValue', items: { label: string, words: Words[] }[] }

/** How a value stands out: always a mark and a weight beside the colour. */
export type Mark = 'above' | 'below' | 'absent' | 'cold' | 'near'
/** The sign of each mark; the PDF's typeface has no triangles and draws arrows of the same direction. */
export const markSigns: Record<Mark, string> = { above: '▲', below: '▼', absent: '▼', cold: '*', near: '≈' }

export interface TextCell {
  words: Words[]
  mark?: Mark
  /** Outside by less than the measurement uncertainty: drawn in the colour of doubt. */
  doubtful?: boolean
  /** A second, small line: "recalled, not verified". */
  below?: string
}
/** A limit bar; `text` says the same in words. */
export interface BarCell { bar: Result, text: string }
export type Cell = TextCell | BarCell

export interface TableBlock {
  kind: 'table'
  /** What the table is, for those who do not see it. */
  caption: string
  columns: { label: string, align: 'left' | 'right' | 'bar', /** takes what is left over */ wide?: boolean }[]
  rows: { cells: Cell[], /** a new nerve begins: the rule above is drawn */ first: boolean, /** repeated warm: struck through */ struck: boolean, runId?: string }[]
}

/** A travel plot: drawn by shared/plots from the frozen study; `text` says the same in words. */
export interface FigureBlock { kind: 'figure', plot: 'travel', runId: string, title: string, text: string }
/** Figures that may stand beside each other. */
export interface FiguresBlock { kind: 'figures', figures: FigureBlock[] }

export interface NoteBlock { kind: 'note', tone: 'warning' | 'plain', words: Words[] }

/** A part of the report with a name of its own, in the order of `index.ts`. */
export interface ReportSection<Source> { id: string, blocks: (source: Source) => Block[] }

/** In every language of the report; a side is never written in capitals for another reason. */
const sideWord = /\b(RIGHT|LEFT|RECHTS|LINKS)\b/

/**
 * Text with the side words strong, wherever they stand: capitals and weight together cut mistakes of side.
 *
 * @example withSides('RIGHT median motor') // => [{ text: 'RIGHT', strong: true }, { text: ' median motor' }]
 */
export function withSides(text: string, rest: Omit<Words, 'text'> = {}): Words[] {
  return text.split(sideWord).filter(Boolean).map(part => sideWord.test(part) ? { ...rest, text: part, strong: true } : { ...rest, text: part })
}

export const heading = (level: HeadingBlock['level'], text: string, id: string): HeadingBlock => ({ kind: 'heading', level, text, id })
export const paragraph = (words: string | Words[], tone: ParagraphBlock['tone'] = 'plain', runIds?: string[]): ParagraphBlock =>
  ({ kind: 'paragraph', tone, words: typeof words === 'string' ? withSides(words) : words, ...(runIds ? { runIds } : {}) })
export const note = (tone: NoteBlock['tone'], words: string | Words[]): NoteBlock => ({ kind: 'note', tone, words: typeof words === 'string' ? withSides(words) : words })
export const plainCell = (text: string, rest: Omit<TextCell, 'words'> = {}): TextCell => ({ words: withSides(text), ...rest })
export const emptyCell: TextCell = { words: [] }

/** The text of a paragraph, cell or note without its weights. */
export const plainText = (words: Words[]): string => words.map(part => part.text).join('')
