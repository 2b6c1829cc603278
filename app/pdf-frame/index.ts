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

interface Place { canvas: HTMLCanvasElement, page: PDFPageProxy }

/** Room for a page in its proportions, to be drawn when it comes into view. */
function placeFor(page: PDFPageProxy, label: string): Place {
  const { width, height } = page.getViewport({ scale: 1 })
  const canvas = document.createElement('canvas')
  Object.assign(canvas.style, { aspectRatio: `${width} / ${height}` })
  canvas.setAttribute('role', 'img')
  canvas.setAttribute('aria-label', label)
  pages.append(canvas)
  return { canvas, page }
}

/** As wide as the frame on this screen. */
async function draw({ canvas, page }: Place): Promise<void> {
  const wide = Math.min(MAX_CANVAS_PX, Math.max(600, pages.clientWidth) * window.devicePixelRatio)
  const viewport = page.getViewport({ scale: wide / page.getViewport({ scale: 1 }).width })
  Object.assign(canvas, { width: Math.round(viewport.width), height: Math.round(viewport.height) })
  await page.render({ canvas, viewport }).promise
}

/** The words of a page behind its picture, for those who hear them. */
async function addWords({ canvas, page }: Place): Promise<void> {
  const words = document.createElement('p')
  words.className = 'words'
  words.textContent = (await page.getTextContent()).items.map(item => 'str' in item ? item.str + (item.hasEOL ? '\n' : ' ') : '').join('')
  canvas.after(words)
}

const failed = (error: unknown) => answer({ pdfFrame: 'failed', because: error instanceof Error && error.name === 'PasswordException' ? 'password' : 'unreadable' })

async function show({ bytes, title }: PdfFrameQuestion): Promise<void> {
  document.title = title
  const pdf = await getDocument({ data: bytes, isEvalSupported: false, enableXfa: false, useWorkerFetch: false, useSystemFonts: true, WasmFactory: Decoders }).promise
  const places: Place[] = []
  for (let number = 1; number <= pdf.numPages; number++) places.push(placeFor(await pdf.getPage(number), `Page ${number} of ${pdf.numPages}`))
  const [first, ...later] = places
  if (first) await draw(first)
  answer({ pdfFrame: 'shown', pages: pdf.numPages })
  const seen = new IntersectionObserver(entries => entries.filter(entry => entry.isIntersecting).forEach(({ target }) => {
    seen.unobserve(target)
    const place = later.find(each => each.canvas === target)
    if (place) draw(place).catch(failed)
  }), { rootMargin: '100% 0%' })
  later.forEach(place => seen.observe(place.canvas))
  for (const place of places) await addWords(place)
}

window.addEventListener('message', ({ data, source }: MessageEvent<PdfFrameQuestion>) => {
  if (source !== window.parent || !(data?.bytes instanceof ArrayBuffer)) return
  pages.replaceChildren()
  show(data).catch(failed)
})
answer({ pdfFrame: 'ready' })
