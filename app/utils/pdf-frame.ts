/** What the page asks of the closed frame that draws a PDF: these bytes, under this title. */
export interface PdfFrameQuestion { bytes: ArrayBuffer, title: string }

/** What the frame answers: it listens, it drew so many pages, or it could not. */
export type PdfFrameAnswer
  = | { pdfFrame: 'ready' }
    | { pdfFrame: 'shown', pages: number }
    | { pdfFrame: 'failed', because: 'password' | 'unreadable' }
