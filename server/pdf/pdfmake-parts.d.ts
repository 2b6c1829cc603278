/**
 * Parts of pdfmake 0.3.11 and pdfkit 0.19.1 that their typings leave out. tests/server/pdf-structure.test.ts fails when a
 * newer version moves them.
 */
declare module 'pdfmake/js/PDFDocument.js' {
  import type { EventEmitter } from 'node:events'

  export interface StructureContent { refs: unknown[] }
  export interface StructureElement {
    add: (child: StructureElement | StructureContent) => StructureElement
    end: () => void
  }
  export default class PDFDocument extends EventEmitter {
    constructor(fonts: object, images: object, patterns: object, attachments: object, options: object, virtualFiles: null, mayRead: (path: string) => boolean)
    markContent(tag: 'Artifact', options: { type: 'Pagination' | 'Layout' }): this
    markStructureContent(tag: string): StructureContent
    endMarkedContent(): this
    struct(type: string, options: { alt?: string, title?: string, scope?: string, bbox?: [left: number, top: number, right: number, bottom: number], placement?: string }): StructureElement
    addStructure(element: StructureElement): this
    end(): void
  }
}

declare module 'pdfmake/js/Renderer.js' {
  import type PDFDocument from 'pdfmake/js/PDFDocument.js'
  import type { Page } from 'pdfmake/js/LayoutBuilder.js'

  export interface DrawnLine { inlines: { tag?: object }[] }
  export interface DrawnSvg { tag?: object, x: number, y: number, _width: number, _height: number }
  export default class Renderer {
    constructor(document: PDFDocument)
    protected pdfDocument: PDFDocument
    renderPages(pages: Page[]): void
    renderLine(line: DrawnLine, x: number, y: number): void
    renderSVG(svg: DrawnSvg): void
    renderVector(vector: object): void
  }
}

declare module 'pdfmake/js/LayoutBuilder.js' {
  import type PDFDocument from 'pdfmake/js/PDFDocument.js'
  import type { Content, TDocumentDefinitions } from 'pdfmake/interfaces'

  export interface Page { pageSize: { width: number, height: number }, items: { type: string, item: { y: number } }[] }
  export default class LayoutBuilder {
    constructor(page: { width: number, height: number, orientation: 'portrait' }, margins: { left: number, right: number, top: number, bottom: number }, svg: object)
    registerTableLayouts(layouts: object): void
    layoutDocument(content: Content, document: PDFDocument, styles: object, defaultStyle: object, background: TDocumentDefinitions['background'], header: TDocumentDefinitions['header'], footer: TDocumentDefinitions['footer'], watermark: undefined, breakBefore: TDocumentDefinitions['pageBreakBefore']): Page[]
  }
}

declare module 'pdfmake/js/SVGMeasure.js' {
  export default class SVGMeasure {
    measureSVG(svg: string): { width?: number, height?: number }
  }
}
