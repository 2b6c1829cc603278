// eslint-disable-next-line @typescript-eslint/triple-slash-reference -- ambient declarations of modules cannot be imported
/// <reference path="./pdfmake-parts.d.ts" />
import type { TDocumentDefinitions } from 'pdfmake/interfaces'
import LayoutBuilderModule from 'pdfmake/js/LayoutBuilder.js'
import PDFDocumentModule from 'pdfmake/js/PDFDocument.js'
import SVGMeasureModule from 'pdfmake/js/SVGMeasure.js'
import { classOf } from './class-of'
import type { ReportPdf } from './report-document'
import { fontFamily, margins, pageHeights, pageWidths } from './style'
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

/**
 * A report as PDF bytes: pdfmake's layout, drawn by a renderer of our own that fills the structure tree. Nothing is fetched
 * and no file is read but the fonts: pdfmake's step that resolves addresses is left out.
 *
 * @param fontsDir the folder of the typeface
 */
export async function makePdf({ definition, structure }: ReportPdf, fontsDir: string): Promise<Uint8Array> {
  const paper = paperOf(definition)
  const document = emptyDocument(definition, fontsDir)
  const layout = new LayoutBuilder({ width: pageWidths[paper], height: pageHeights[paper], orientation: 'portrait' }, margins, new SVGMeasure())
  layout.registerTableLayouts({})
  const { content, defaultStyle = {}, background, header, footer, pageBreakBefore } = definition
  const pages = layout.layoutDocument(content, document, {}, defaultStyle, background, header, footer, undefined, pageBreakBefore)
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
