// eslint-disable-next-line @typescript-eslint/triple-slash-reference -- ambient declarations of modules cannot be imported
/// <reference path="./pdfmake-parts.d.ts" />
import type PDFDocument from 'pdfmake/js/PDFDocument.js'
import type { StructureContent, StructureElement } from 'pdfmake/js/PDFDocument.js'
import type { Page } from 'pdfmake/js/LayoutBuilder.js'
import RendererModule, { type DrawnLine, type DrawnSvg } from 'pdfmake/js/Renderer.js'
import { classOf } from './class-of'
import type { Tag } from './structure'

const Renderer = classOf(RendererModule)
type Box = [left: number, top: number, right: number, bottom: number]
interface Drawn { page: number, contents: StructureContent[], box?: Box }

/**
 * pdfmake's drawing of the finished layout, with every stroke marked: what carries a tag belongs to that element, the rest
 * is an artefact. pdfmake itself draws everything unmarked, whatever its `tagged` says.
 */
export class TaggedRenderer extends Renderer {
  private readonly drawn = new Map<Tag, Drawn>()
  private page = 0

  constructor(document: PDFDocument, private readonly root: Tag) {
    super(document)
  }

  override renderPages(pages: Page[]): void {
    this.page = 0
    // A page is added as its first item comes; a page without items would not be counted, and has nothing to mark.
    for (const page of pages) {
      this.page++
      super.renderPages([page])
    }
    this.pdfDocument.addStructure(this.element(this.root))
  }

  override renderLine(line: DrawnLine, x: number, y: number): void {
    this.marked(line.inlines.find(inline => inline.tag)?.tag as Tag | undefined, 'Pagination', () => super.renderLine(line, x, y))
  }

  override renderSVG(svg: DrawnSvg): void {
    this.marked(svg.tag as Tag | undefined, 'Pagination', () => super.renderSVG(svg), [svg.x, svg.y, svg.x + svg._width, svg.y + svg._height])
  }

  override renderVector(vector: object): void {
    this.marked(undefined, 'Layout', () => super.renderVector(vector))
  }

  private marked(tag: Tag | undefined, otherwise: 'Pagination' | 'Layout', draw: () => void, box?: Box): void {
    const known = tag && (this.drawn.get(tag) ?? { page: this.page, contents: [], ...(box ? { box } : {}) })
    if (tag && known && !(tag.once && known.page !== this.page)) {
      this.drawn.set(tag, known)
      known.contents.push(this.pdfDocument.markStructureContent(tag.name))
    }
    else {
      this.pdfDocument.markContent('Artifact', { type: otherwise })
    }
    draw()
    this.pdfDocument.endMarkedContent()
  }

  /** An element with all below it, in the order of the tree and not of the drawing. */
  private element(tag: Tag): StructureElement {
    const { alt, scope, title } = tag
    const drawn = this.drawn.get(tag)
    const box = tag.name === 'Figure' ? drawn?.box : undefined
    const element = this.pdfDocument.struct(tag.name, { ...(alt ? { alt } : {}), ...(scope ? { scope } : {}), ...(title ? { title } : {}), ...(box ? { bbox: box } : {}) })
    for (const content of drawn?.contents ?? []) element.add(content)
    for (const child of tag.children) element.add(this.element(child))
    element.end()
    return element
  }
}
