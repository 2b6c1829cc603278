// eslint-disable-next-line @typescript-eslint/triple-slash-reference -- ambient declarations of modules cannot be imported
/// <reference path="./pdfmake-parts.d.ts" />
import type { TDocumentDefinitions } from 'pdfmake/interfaces'
import type { ReportSource } from '#shared/report/index'
import LayoutBuilderModule, { type Page } from 'pdfmake/js/LayoutBuilder.js'
import PDFDocumentModule from 'pdfmake/js/PDFDocument.js'
import SVGMeasureModule from 'pdfmake/js/SVGMeasure.js'
import { classOf } from './class-of'
import { reportDocument, type ReportPdf } from './report-document'
import type { Tag } from './structure'
import { close, fontFamily, margins, pageHeights, pageWidths } from './style'
import { TaggedRenderer } from './tagged-renderer'

const LayoutBuilder = classOf(LayoutBuilderModule)
const PDFDocument = classOf(PDFDocumentModule)
const SVGMeasure = classOf(SVGMeasureModule)

type Paper = keyof typeof pageWidths
const paperOf = ({ pageSize }: TDocumentDefinitions): Paper => pageSize === 'LETTER' ? 'LETTER' : 'A4'

/** Names of properties of the document as PDF writes them. */
const infoOf = ({ info = {} }: TDocumentDefinitions) => ({ Title: info.title, Author: info.author, Creator: info.creator, Producer: info.producer, CreationDate: info.creationDate, ModDate: info.modDate })

function emptyDocument(definition: TDocumentDefinitions, fontsDir: string) {
  const face = (name: string) => `${fontsDir}/IBMPlexSans-${name}.ttf`
  // Real paths: text inside SVG ignores pdfmake's virtual files, and buffers are refused.
  const fonts = { [fontFamily]: { normal: face('Regular'), bold: face('SemiBold'), italics: face('Italic'), bolditalics: face('SemiBold') } }
  const paper = paperOf(definition)
  return new PDFDocument(fonts, {}, {}, {}, {
    size: [pageWidths[paper], pageHeights[paper]],
    pdfVersion: definition.version, tagged: true, displayTitle: true, compress: definition.compress, lang: definition.language,
    fontLayoutCache: true, bufferPages: false, autoFirstPage: false, info: infoOf(definition), font: null,
  }, null, path => path.startsWith(fontsDir))
}

interface Laid { document: InstanceType<typeof PDFDocument>, pages: Page[], structure: Tag }

function layOut({ definition, structure }: ReportPdf, fontsDir: string): Laid {
  const paper = paperOf(definition)
  const document = emptyDocument(definition, fontsDir)
  const layout = new LayoutBuilder({ width: pageWidths[paper], height: pageHeights[paper], orientation: 'portrait' }, margins, new SVGMeasure())
  layout.registerTableLayouts({})
  const { content, defaultStyle = {}, background, header, footer, pageBreakBefore } = definition
  return { document, structure, pages: layout.layoutDocument(content, document, {}, defaultStyle, background, header, footer, undefined, pageBreakBefore) }
}

/** The part of the last page that holds lines of the report. */
function lastPageFilled({ pages }: Laid): number {
  const last = pages.at(-1)
  if (!last) return 0
  const bottom = last.pageSize.height - margins.bottom
  const lines = last.items.flatMap(({ type, item }) => type === 'line' && item.y < bottom ? [item.y] : [])
  return (Math.max(margins.top, ...lines) - margins.top) / (bottom - margins.top)
}

/** Standing close spares about this part of every page; measured on the reports of the tests. */
const SPARED = 0.12

/**
 * A report as PDF bytes, its parts closer where that spares a last page that would hold little: a signature does not stand
 * alone. The same source always gives the same bytes.
 *
 * @param fontsDir the folder of the typeface
 */
export async function makeReportPdf(source: ReportSource, fontsDir: string): Promise<Uint8Array> {
  const first = layOut(reportDocument(source), fontsDir)
  if (first.pages.length < 2 || lastPageFilled(first) > SPARED * first.pages.length) return await drawn(first)
  const closer = layOut(reportDocument(source, close), fontsDir)
  return await drawn(closer.pages.length < first.pages.length ? closer : first)
}

/**
 * pdfmake's layout, drawn by a renderer of our own that fills the structure tree. Nothing is fetched and no file is read but
 * the fonts: pdfmake's step that resolves addresses is left out.
 */
async function drawn({ document, structure, pages }: Laid): Promise<Uint8Array> {
  new TaggedRenderer(document, structure).renderPages(pages)
  return await bytesOf(document)
}

async function bytesOf(document: InstanceType<typeof PDFDocument>): Promise<Uint8Array> {
  const parts: Buffer[] = []
  return await new Promise((resolve, reject) => {
    document.on('data', (part: Buffer) => parts.push(part))
    document.on('end', () => resolve(new Uint8Array(Buffer.concat(parts))))
    document.on('error', reject)
    document.end()
  })
}
