/**
 * As much PDF syntax as is needed to read what pdfkit writes: indirect objects with strings, names, numbers, arrays,
 * dictionaries and streams of a direct or indirect length; no object streams, no cross-reference streams.
 */
export interface PdfObject { number: number, generation: number, /** the object's text without its stream, as bytes in latin1 */ body: string, stream: Uint8Array | null }
export interface PdfFile { version: string, objects: PdfObject[], /** the trailer dictionary's text */ trailer: string }

const latin1 = (bytes: Uint8Array): string => Buffer.from(bytes).toString('latin1')

/** @throws Error when the file is not of the plain kind described above */
export function readPlainPdf(bytes: Uint8Array): PdfFile {
  const text = latin1(bytes)
  const version = /^%PDF-(\d\.\d)/.exec(text)?.[1]
  const offsets = crossReference(text)
  const trailer = /trailer\s*(<<[\s\S]*?>>)\s*startxref/.exec(text.slice(text.lastIndexOf('trailer')))?.[1]
  if (!version || !trailer) throw new Error('This is not a PDF with a plain trailer.')
  return { version, trailer, objects: offsets.map(offset => objectAt(text, bytes, offset)) }
}

function crossReference(text: string): number[] {
  const start = Number(/startxref\s+(\d+)\s+%%EOF\s*$/.exec(text)?.[1] ?? Number.NaN)
  const section = /^xref\s+0 (\d+)\s+/.exec(text.slice(start, start + 40))
  if (!section) throw new Error('This PDF has no plain cross-reference table.')
  const first = start + section[0].length
  return Array.from({ length: Number(section[1]) }, (_, index) => text.slice(first + index * 20, first + index * 20 + 18))
    .filter(entry => entry.endsWith('n')).map(entry => Number(entry.slice(0, 10)))
}

function objectAt(text: string, bytes: Uint8Array, offset: number): PdfObject {
  const head = /^(\d+) (\d+) obj\s*/.exec(text.slice(offset, offset + 40))
  if (!head) throw new Error('An entry of the cross-reference table points to no object.')
  const from = offset + head[0].length
  const bodyEnd = endOfBody(text, from)
  const body = text.slice(from, bodyEnd).trimEnd()
  const opening = /^stream\r?\n/.exec(text.slice(bodyEnd, bodyEnd + 10))
  return { number: Number(head[1]), generation: Number(head[2]), body, stream: opening ? streamOf(body, text, bytes, bodyEnd + opening[0].length) : null }
}

function endOfBody(text: string, from: number): number {
  for (const token of tokens(text, from)) {
    if (token.kind === 'word' && (token.text === 'stream' || token.text === 'endobj')) return token.from
  }
  throw new Error('An object of this PDF has no end.')
}

function streamOf(body: string, text: string, bytes: Uint8Array, from: number): Uint8Array {
  const length = Number(/\/Length (\d+)(?! \d+ R)/.exec(body)?.[1] ?? Number.NaN)
  if (!Number.isInteger(length) || !/^\r?\n?endstream/.test(text.slice(from + length, from + length + 12))) throw new Error('A stream of this PDF has no direct length.')
  return bytes.subarray(from, from + length)
}

export interface PdfToken { kind: 'string' | 'hex' | 'word' | 'mark', from: number, to: number, text: string }

/** Strings, names, numbers and marks, one after another; white space and comments are left out. */
export function* tokens(text: string, from = 0): Generator<PdfToken> {
  const pattern = /[\s\0]+|%[^\r\n]*|<<|>>|<[0-9A-Fa-f\s]*>|[[\]{}]|\/?[^\s\0()<>[\]{}/%]+|\/|\(/gy
  let at = from
  while (at < text.length) {
    pattern.lastIndex = at
    const match = pattern.exec(text)
    if (!match) throw new Error('This PDF holds a sign where none may stand.')
    const [found] = match
    const to = found === '(' ? endOfString(text, at) : at + found.length
    if (!/^[\s\0%]/.test(found)) yield { kind: kindOf(found), from: at, to, text: text.slice(at, to) }
    at = to
  }
}

function kindOf(found: string): PdfToken['kind'] {
  if (found === '(') return 'string'
  if (found.startsWith('<') && found !== '<<') return 'hex'
  return /^(?:<<|>>|[[\]{}])$/.test(found) ? 'mark' : 'word'
}

function endOfString(text: string, from: number): number {
  let depth = 0
  for (let at = from; at < text.length; at++) {
    if (text[at] === '\\') at++
    else if (text[at] === '(') depth++
    else if (text[at] === ')' && --depth === 0) return at + 1
  }
  throw new Error('A string of this PDF has no end.')
}

const escapes: Record<string, string> = { n: '\n', r: '\r', t: '\t', b: '\b', f: '\f' }

/** The bytes that a literal or hexadecimal string stands for. */
export function stringBytes(token: PdfToken): Buffer {
  if (token.kind === 'hex') {
    const digits = token.text.slice(1, -1).replace(/\s/g, '')
    return Buffer.from(digits.length % 2 ? `${digits}0` : digits, 'hex')
  }
  const inner = token.text.slice(1, -1).replace(/\\(\r\n|[0-7]{1,3}|[\s\S])/g, (_, sign: string) => {
    if (/^[0-7]/.test(sign)) return String.fromCharCode(Number.parseInt(sign, 8) & 255)
    return /^[\r\n]/.test(sign) ? '' : escapes[sign] ?? sign
  })
  return Buffer.from(inner, 'latin1')
}
