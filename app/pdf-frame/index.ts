import { getDocument, type PDFPageProxy } from 'pdfjs-dist/legacy/build/pdf.mjs'
// The same thread draws: a document of no origin may start no worker.
import * as pdfWorker from 'pdfjs-dist/legacy/build/pdf.worker.mjs'
import jbig2 from 'pdfjs-dist/wasm/jbig2.wasm'
import openjpeg from 'pdfjs-dist/wasm/openjpeg.wasm'
import type { PdfFrameAnswer, PdfFrameQuestion } from '../utils/pdf-frame'

/**
 * The page inside the closed frame (`PdfPreview`): draws the pages of a PDF that somebody sent in. It has no origin, no
 * cookies, no storage and no network; the bytes come from the page around it, and only the count of pages goes back.
 */
Object.assign(globalThis, { pdfjsWorker: pdfWorker })

/** The decoders of two image formats that scanners write. */
class Decoders {
  fetch({ filename }: { filename: string }): Promise<Uint8Array> {
    const found = ({ 'jbig2.wasm': jbig2, 'openjpeg.wasm': openjpeg } as Record<string, Uint8Array>)[filename]
    return found ? Promise.resolve(found.slice()) : Promise.reject(new Error(`No ${filename} here.`))
  }
}

const MAX_CANVAS_PX = 2400
const pages = document.getElementById('pages')!
const answer = (message: PdfFrameAnswer) => window.parent.postMessage(message, '*')

/** A picture of the page as wide as the frame on this screen, and its words for those who hear it. */
async function draw(page: PDFPageProxy, label: string): Promise<void> {
  const { width } = page.getViewport({ scale: 1 })
  const viewport = page.getViewport({ scale: Math.min(MAX_CANVAS_PX, Math.max(600, pages.clientWidth) * window.devicePixelRatio) / width })
  const canvas = document.createElement('canvas')
  Object.assign(canvas, { width: Math.round(viewport.width), height: Math.round(viewport.height) })
  canvas.setAttribute('role', 'img')
  canvas.setAttribute('aria-label', label)
  pages.append(canvas)
  await page.render({ canvas, viewport }).promise
  const text = document.createElement('p')
  text.className = 'text'
  text.textContent = (await page.getTextContent()).items.map(item => 'str' in item ? item.str + (item.hasEOL ? '\n' : ' ') : '').join('')
  pages.append(text)
}

async function show({ bytes, title }: PdfFrameQuestion): Promise<void> {
  document.title = title
  const pdf = await getDocument({ data: bytes, isEvalSupported: false, enableXfa: false, useWorkerFetch: false, useSystemFonts: true, WasmFactory: Decoders }).promise
  for (let number = 1; number <= pdf.numPages; number++) await draw(await pdf.getPage(number), `Page ${number} of ${pdf.numPages}`)
  answer({ pdfFrame: 'shown', pages: pdf.numPages })
}

window.addEventListener('message', ({ data, source }: MessageEvent<PdfFrameQuestion>) => {
  if (source !== window.parent || !(data?.bytes instanceof ArrayBuffer)) return
  pages.replaceChildren()
  show(data).catch((error: unknown) => answer({ pdfFrame: 'failed', because: error instanceof Error && error.name === 'PasswordException' ? 'password' : 'unreadable' }))
})
answer({ pdfFrame: 'ready' })
