import { createCipheriv, createHash, randomBytes } from 'node:crypto'
import { readPlainPdf, stringBytes, tokens, type PdfFile, type PdfObject } from './pdf-syntax'

/**
 * Encrypts a finished PDF with a passphrase: AES-256, standard security handler, V 5, R 6 (ISO 32000-2:2020, 7.6.4.3
 * and 7.6.4.4, algorithms 2.A, 2.B, 8, 9 and 10; from memory, and checked in the tests by opening with qpdf and pdf.js).
 *
 * Why not pdfmake's own: its `1.7ext3` is AES-256 at revision 5, whose password check is a single SHA-256 and was
 * withdrawn from the standard; revision 6 hardens it. And it encrypts while rendering, so what is sent would be
 * another rendering than the stored, hashed one. Here the stored bytes themselves are encrypted: decrypted, every
 * string and every stream is the same as in the signed version's PDF.
 *
 * Every sending has a file key, salts and initialisation vectors of its own. The owner's password is random and
 * thrown away: nobody holds rights beyond those of the reader.
 */
export function encryptPdf(bytes: Uint8Array, passphrase: string): Uint8Array {
  const file = readPlainPdf(bytes)
  const fileKey = randomBytes(32)
  const encryptNumber = Math.max(...file.objects.map(object => object.number)) + 1
  const root = Number(/\/Root (\d+) \d+ R/.exec(file.trailer)?.[1])
  const objects = file.objects.map(object => encryptObject(object.number === root ? withExtension(object) : object, fileKey))
  const dictionary: PdfObject = { number: encryptNumber, generation: 0, body: encryptionDictionary(passphrase, fileKey), stream: null }
  return writePdf(file, [...objects, dictionary], encryptNumber)
}

/** Says that a file with header 1.7 uses the encryption of the later standard. */
function withExtension(catalog: PdfObject): PdfObject {
  return { ...catalog, body: catalog.body.replace(/>>\s*$/, '/Extensions <</ADBE <</BaseVersion /1.7 /ExtensionLevel 8>>>>\n>>') }
}

/** AES-256 in CBC mode; the random initialisation vector stands before the text. */
function encryptBytes(plain: Uint8Array, fileKey: Uint8Array): Buffer {
  const iv = randomBytes(16)
  const cipher = createCipheriv('aes-256-cbc', fileKey, iv)
  return Buffer.concat([iv, cipher.update(plain), cipher.final()])
}

function encryptObject(object: PdfObject, fileKey: Uint8Array): PdfObject {
  const stream = object.stream && encryptBytes(object.stream, fileKey)
  const body = encryptStrings(object.body, fileKey)
  return { ...object, stream, body: stream ? body.replace(/\/Length \d+/, `/Length ${stream.length}`) : body }
}

function encryptStrings(body: string, fileKey: Uint8Array): string {
  let written = ''
  let at = 0
  for (const token of tokens(body)) {
    if (token.kind !== 'string' && token.kind !== 'hex') continue
    written += `${body.slice(at, token.from)}<${encryptBytes(stringBytes(token), fileKey).toString('hex')}>`
    at = token.to
  }
  return written + body.slice(at)
}

const sha = (bits: 256 | 384 | 512, ...parts: Uint8Array[]) => createHash(`sha${bits}`).update(Buffer.concat(parts)).digest()

/** Algorithm 2.B: the hardened hash of revision 6. `user` is the U string where the owner's entries are made. */
function hardenedHash(password: Uint8Array, salt: Uint8Array, user: Uint8Array = Buffer.alloc(0)): Buffer {
  let key = sha(256, password, salt, user)
  for (let round = 1; ; round++) {
    const block = Buffer.concat(Array.from({ length: 64 }, () => Buffer.concat([password, key, user])))
    const cipher = createCipheriv('aes-128-cbc', key.subarray(0, 16), key.subarray(16, 32)).setAutoPadding(false)
    const encrypted = Buffer.concat([cipher.update(block), cipher.final()])
    const rest = encrypted.subarray(0, 16).reduce((sum, byte) => sum + byte, 0) % 3
    key = sha(rest === 0 ? 256 : rest === 1 ? 384 : 512, encrypted)
    if (round >= 64 && encrypted.at(-1)! <= round - 32) return key.subarray(0, 32)
  }
}

function wrapKey(fileKey: Uint8Array, wrapping: Uint8Array): Buffer {
  const cipher = createCipheriv('aes-256-cbc', wrapping, Buffer.alloc(16)).setAutoPadding(false)
  return Buffer.concat([cipher.update(fileKey), cipher.final()])
}

/** Reading aloud and printing allowed, changing not; bits 7, 8 and all above 12 are 1, bits 1 and 2 are 0 (table 22). */
const permissions = -1 & ~0b11 & ~(1 << 3) & ~(1 << 5) & ~(1 << 8) & ~(1 << 10)

function permissionsBlock(fileKey: Uint8Array): Buffer {
  const block = Buffer.concat([Buffer.alloc(8, 0xFF), Buffer.from('Tadb', 'latin1'), randomBytes(4)])
  block.writeInt32LE(permissions, 0)
  const cipher = createCipheriv('aes-256-ecb', fileKey, null).setAutoPadding(false)
  return Buffer.concat([cipher.update(block), cipher.final()])
}

/** One password's check value with its salts, and the file key wrapped under it. */
function passwordEntries(password: Uint8Array, fileKey: Uint8Array, user?: Uint8Array): { check: Buffer, wrapped: Buffer } {
  const [checkSalt, keySalt] = [randomBytes(8), randomBytes(8)]
  return {
    check: Buffer.concat([hardenedHash(password, checkSalt, user), checkSalt, keySalt]),
    wrapped: wrapKey(fileKey, hardenedHash(password, keySalt, user)),
  }
}

function encryptionDictionary(passphrase: string, fileKey: Uint8Array): string {
  const password = Buffer.from(passphrase.normalize('NFKC'), 'utf8').subarray(0, 127)
  const user = passwordEntries(password, fileKey)
  const owner = passwordEntries(randomBytes(32), fileKey, user.check)
  const hex = (value: Buffer) => `<${value.toString('hex')}>`
  return [
    '<< /Filter /Standard /V 5 /R 6 /Length 256',
    `/P ${permissions} /EncryptMetadata true`,
    '/CF << /StdCF << /Type /CryptFilter /CFM /AESV3 /AuthEvent /DocOpen /Length 32 >> >> /StmF /StdCF /StrF /StdCF',
    `/U ${hex(user.check)} /UE ${hex(user.wrapped)}`,
    `/O ${hex(owner.check)} /OE ${hex(owner.wrapped)}`,
    `/Perms ${hex(permissionsBlock(fileKey))} >>`,
  ].join('\n')
}

function writeObject({ number, generation, body, stream }: PdfObject): Buffer {
  const head = Buffer.from(`${number} ${generation} obj\n${body}\n`, 'latin1')
  const middle = stream ? [Buffer.from('stream\n', 'latin1'), Buffer.from(stream), Buffer.from('\nendstream\n', 'latin1')] : []
  return Buffer.concat([head, ...middle, Buffer.from('endobj\n', 'latin1')])
}

function writePdf(file: PdfFile, objects: PdfObject[], encryptNumber: number): Uint8Array {
  const parts: Buffer[] = [Buffer.from('%PDF-1.7\n%\u00FF\u00FF\u00FF\u00FF\n', 'latin1')]
  const offsets = new Map<number, number>()
  let at = parts[0]!.length
  for (const object of objects) {
    const part = writeObject(object)
    offsets.set(object.number, at)
    parts.push(part)
    at += part.length
  }
  parts.push(Buffer.from(tail(file, offsets, encryptNumber, at), 'latin1'))
  return new Uint8Array(Buffer.concat(parts))
}

function tail(file: PdfFile, offsets: Map<number, number>, encryptNumber: number, start: number): string {
  const size = encryptNumber + 1
  const entries = Array.from({ length: size }, (_, number) => {
    const offset = offsets.get(number)
    return offset === undefined ? '0000000000 65535 f \n' : `${String(offset).padStart(10, '0')} 00000 n \n`
  })
  const trailer = file.trailer.replace(/\/Size \d+/, `/Size ${size}`).replace(/>>\s*$/, `/Encrypt ${encryptNumber} 0 R\n>>`)
  return `xref\n0 ${size}\n${entries.join('')}trailer\n${trailer}\nstartxref\n${start}\n%%EOF\n`
}
