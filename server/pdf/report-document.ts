import type { Content, DynamicContent, TDocumentDefinitions } from 'pdfmake/interfaces'
import { formatDay } from '#shared/report/dates'
import { reportBlocks, type ReportSource } from '#shared/report/index'
import { reportWords, type ReportWords } from '#shared/report/words'
import { printable } from './glyphs'
import { headlineLevels, renderBlocks } from './render-blocks'
import { tagged } from './render-table'
import { stampSvg } from './stamp'
import { addTag, newTag, type Tag } from './structure'
import { fontFamily, ink, lineWidth, margins, size, usual, type Spacing } from './style'

/** The product's mark: a line with one gap and a node in it. */
const mark = `<svg xmlns="http://www.w3.org/2000/svg" width="34" height="14" viewBox="0 0 34 14"><path d="M4 7h6M24 7h6" stroke="${ink.ink}" stroke-width="7" stroke-linecap="round"/><circle cx="17" cy="7" r="2.4" fill="${ink.ink}"/></svg>`

function rule(width: number, thickness: number, colour: string): Content {
  return { canvas: [{ type: 'line', x1: 0, y1: 0, x2: width, y2: 0, lineWidth: thickness, lineColor: colour }] }
}

/** A technical report is headed as such. */
const titleOf = ({ draft }: ReportSource['snapshot'], words: ReportWords) => draft.technicalOnly ? words.technicalTitle : words.title

/** Who made it, which version it is: on every page. On the first one the title of the report is its heading. */
function header({ snapshot, preliminary }: ReportSource, title: Tag): Content {
  const words = reportWords(snapshot.language)
  const status = preliminary ? words.preliminary.toLowerCase() : words.status[snapshot.status]
  const place = [snapshot.organisation.name, snapshot.site.name].filter(Boolean).join(', ')
  return {
    margin: [margins.left, 24, margins.right, 0],
    stack: [
      { columns: [
        { svg: mark, width: 26, margin: [0, 1, 0, 0] },
        { text: printable(place), bold: true, width: '*', fontSize: size.body },
        { text: tagged(`${titleOf(snapshot, words)} · ${words.version(snapshot.version, status)}`, title), alignment: 'right', width: 'auto', color: ink.faint, fontSize: size.body },
      ], columnGap: 7, margin: [0, 0, 0, 4] },
      rule(lineWidth(snapshot.organisation.paperSize), 1.4, ink.ink),
    ],
  }
}

/** Two identifiers and "page x of y" on every page: a sheet that falls out of the file can be put back. */
function footer(source: ReportSource): DynamicContent {
  const { snapshot } = source
  const words = reportWords(snapshot.language)
  const { patient } = snapshot
  const who = `${patient.familyName.toLocaleUpperCase('en')}, ${patient.givenName} · ${formatDay(patient.birthDate, words.days)} · ${patient.recordNumber}`
  return (page, pages) => ({
    margin: [margins.left, 14, margins.right, 0],
    fontSize: size.footer,
    color: ink.faint,
    columns: [
      { text: printable(who), width: '*' },
      { text: printable([stamp(source), snapshot.number, words.page(page, pages)].filter(Boolean).join(' · ')), width: 'auto', alignment: 'right' },
    ],
  })
}

/** PRELIMINARY and DEMONSTRATION, or nothing. */
function stamp({ snapshot, preliminary }: ReportSource): string {
  const words = reportWords(snapshot.language)
  return [preliminary && words.preliminary, snapshot.demonstration && words.demonstration].filter(Boolean).join(' ')
}

/** Room that a heading needs below it: itself, the head of a table and one row of two lines. */
const roomBelowHeading: Record<number, number> = { [headlineLevels.rows]: 76, [headlineLevels.plots]: 160 }

/** A heading moves to the next page when nothing that belongs to it would stand below it. */
const keepHeadings: TDocumentDefinitions['pageBreakBefore'] = (node, nodes) => {
  const room = roomBelowHeading[node.headlineLevel ?? 0]
  if (room === undefined) return false
  const { top, pageInnerHeight } = node.startPosition
  return nodes.getFollowingNodesOnPage().length === 0 || top - margins.top > pageInnerHeight - room
}

/** What is laid out, and the structure tree that its parts point into. */
export interface ReportPdf { definition: TDocumentDefinitions, structure: Tag }

/**
 * The definition of a report's PDF. pdfmake changes what it is given, so every rendering needs a new one.
 * The date is that of the signature and the rest comes from the frozen copy: the same version gives the same bytes.
 */
export function reportDocument(source: ReportSource, spacing: Spacing = usual): ReportPdf {
  const { snapshot, preliminary } = source
  const words = reportWords(snapshot.language)
  const made = new Date(snapshot.signature.at)
  const structure = newTag('Document')
  const title = addTag(structure, 'H1', { once: true })
  const definition: TDocumentDefinitions = {
    info: { title: printable(`${titleOf(snapshot, words)} ${snapshot.number}, ${preliminary ? words.preliminary.toLowerCase() : words.version(snapshot.version, words.status[snapshot.status])}`), author: printable(snapshot.organisation.name), creator: 'Orthodrome', producer: 'Orthodrome', creationDate: made, modDate: made },
    version: '1.7',
    language: snapshot.language,
    compress: true,
    pageSize: snapshot.organisation.paperSize,
    pageMargins: [margins.left, margins.top, margins.right, margins.bottom],
    defaultStyle: { font: fontFamily, fontSize: size.body, color: ink.ink, lineHeight: spacing.lineHeight },
    header: () => header(source, title),
    footer: footer(source),
    ...(stamp(source) ? { background: (_page: number, paper: { width: number, height: number }) => ({ svg: stampSvg(stamp(source), paper), width: paper.width, height: paper.height }) } : {}),
    content: reportBlocks(source).flatMap(part => renderBlocks(part.blocks, { snapshot, words, spacing }, structure)),
    pageBreakBefore: keepHeadings,
  }
  return { definition, structure }
}
