import { inflateSync } from 'node:zlib'
import { fileTypeFromBuffer } from 'file-type'
import sharp from 'sharp'
import { DomainError } from '#shared/errors'

/** What is kept of a sent file: its type by content, not by name, and for pictures the re-encoded bytes. */
export interface CheckedFile { mediaType: 'application/pdf' | 'image/png' | 'image/jpeg', extension: 'pdf' | 'png' | 'jpg', bytes: Uint8Array }

export const UPLOAD_LIMIT_BYTES = 10 * 1024 * 1024
/** A letter page scanned at 600 dots per inch has 35 million. */
const MOST_PIXELS = 40_000_000
const MOST_PDF_PAGES = 100
/** All the packed objects of a letter together; more is a bomb. */
const MOST_UNPACKED_BYTES = 32 * 1024 * 1024

const refused = (message: string) => new DomainError('wrong-file-type', { message })

/**
 * Looks at the bytes. Pictures are decoded and written anew, which leaves out whatever else was in the file (place and
 * time of a photograph, appended data); PDF files with programs or other files inside are refused.
 * @throws DomainError 'too-large' or 'wrong-file-type'
 */
export async function checkUpload(bytes: Uint8Array): Promise<CheckedFile> {
  if (bytes.length > UPLOAD_LIMIT_BYTES) throw new DomainError('too-large')
  const found = await fileTypeFromBuffer(bytes)
  if (found?.mime === 'application/pdf') return { mediaType: found.mime, extension: 'pdf', bytes: checkPdf(bytes) }
  if (found?.mime === 'image/png') return { mediaType: found.mime, extension: 'png', bytes: await encodeAgain(bytes, 'png') }
  if (found?.mime === 'image/jpeg') return { mediaType: found.mime, extension: 'jpg', bytes: await encodeAgain(bytes, 'jpeg') }
  throw new DomainError('wrong-file-type')
}

let turn: Promise<unknown> = Promise.resolve()

/** One picture after the other: decoded, a file of some hundred kilobytes can take 200 MB and every thread of the process. */
function inTurn<T>(work: () => Promise<T>): Promise<T> {
  const mine = turn.then(work)
  turn = mine.catch(() => undefined)
  return mine
}

const encodeAgain = (bytes: Uint8Array, format: 'png' | 'jpeg') => inTurn(() => encode(bytes, format))

async function encode(bytes: Uint8Array, format: 'png' | 'jpeg'): Promise<Uint8Array> {
  try {
    const picture = sharp(bytes, { limitInputPixels: MOST_PIXELS, failOn: 'error' }).rotate()
    return await (format === 'png' ? picture.png() : picture.jpeg({ quality: 88 })).toBuffer()
  }
  catch {
    throw refused('The picture is damaged or has more than 40 million pixels. Nothing was stored.')
  }
}

/** Without a PDF reader: counts page objects and the page tree's own counts as far as they stand in plain text. */
export function pdfPages(text: string): number {
  const objects = text.match(/\/Type\s*\/Page(?![A-Za-z])/g)?.length ?? 0
  const counts = [...text.matchAll(/\/Count\s+(\d{1,9})/g)].map(match => Number(match[1]))
  return Math.max(objects, ...counts)
}

/**
 * Names as a PDF reader takes them: each character may be written as # and two hexadecimal digits (ISO 32000-2, 7.3.5,
 * from memory). `JS` counts only before a text or a reference: three bytes stand by chance in every larger scan.
 */
const plainNames = (text: string) => text.replace(/#([0-9A-Fa-f]{2})/g, (_, digits: string) => String.fromCharCode(Number.parseInt(digits, 16)))

function hasProgramOrFile(text: string): boolean {
  const plain = plainNames(text)
  return /\/(?:JavaScript|Launch|EmbeddedFiles?)\b/.test(plain) || /\/JS\s*(?:[(<]|\d+\s+\d+\s+R)/.test(plain)
}

/**
 * The objects that a PDF keeps packed (object streams, ISO 32000-2, 7.5.7, from memory): pages and programs can stand
 * there, unseen in the plain text.
 * @throws DomainError when they cannot be unpacked, as in a file that is encrypted
 */
export function packedObjects(bytes: Uint8Array, text: string): string {
  const named = /\/Type\s*\/ObjStm\b/g
  if ((plainNames(text).match(named)?.length ?? 0) > (text.match(named)?.length ?? 0)) throw refused('The PDF hides parts of itself. Print it to a new PDF and send that. Nothing was stored.')
  const parts: string[] = []
  let left = MOST_UNPACKED_BYTES
  for (const match of text.matchAll(named)) {
    const begin = /stream\r?\n/g
    begin.lastIndex = match.index
    const from = begin.exec(text) ? begin.lastIndex : -1
    const until = from < 0 ? -1 : text.indexOf('endstream', from)
    if (until < 0) throw refused('The PDF is cut short or damaged. Nothing was stored.')
    try {
      const unpacked = inflateSync(bytes.subarray(from, until), { maxOutputLength: left })
      left -= unpacked.length
      parts.push(unpacked.toString('latin1'))
    }
    catch {
      throw refused('The PDF is protected or packed in a way that cannot be checked. Print it to a new PDF and send that. Nothing was stored.')
    }
  }
  return parts.join('\n')
}

function checkPdf(bytes: Uint8Array): Uint8Array {
  const text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString('latin1')
  if (!text.startsWith('%PDF-') || !text.slice(-2048).includes('%%EOF')) throw refused('The PDF is cut short or damaged. Nothing was stored.')
  const all = `${text}\n${packedObjects(bytes, text)}`
  if (hasProgramOrFile(all)) throw refused('The PDF has a program or another file inside. Print it to a new PDF and send that. Nothing was stored.')
  if (pdfPages(all) > MOST_PDF_PAGES) throw refused(`The PDF has more than ${MOST_PDF_PAGES} pages. Nothing was stored.`)
  return bytes
}
