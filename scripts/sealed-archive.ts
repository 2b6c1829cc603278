import { createHash } from 'node:crypto'
import { closeSync, mkdirSync, openSync, readSync, statSync, writeSync } from 'node:fs'
import { dirname, join, normalize, sep } from 'node:path'
import type { Keys } from '#server/services/keys'

/**
 * A backup in one file: chunks sealed one by one with the application's key (AES-256-GCM), each behind its length.
 * The first chunk is the list of files with their sizes and SHA-256; the rest are the files' bytes in that order. A chunk
 * carries its own number, so that none can be left out, repeated or moved unnoticed.
 */
export const ARCHIVE_FORMAT = 'orthodrome-backup/1'
const CHUNK_BYTES = 4 * 1024 * 1024

export interface ArchiveList { format: typeof ARCHIVE_FORMAT, madeAt: string, auditHead: string, files: { name: string, byteCount: number, sha256: string }[] }

/** Reads a file in pieces; `take` gets each. */
function readPieces(file: string, take: (piece: Buffer) => void): void {
  const handle = openSync(file, 'r')
  const buffer = Buffer.alloc(CHUNK_BYTES)
  try {
    for (let size = readSync(handle, buffer); size > 0; size = readSync(handle, buffer)) take(Buffer.from(buffer.subarray(0, size)))
  }
  finally {
    closeSync(handle)
  }
}

/** Size and SHA-256 of a file, under the name it gets in the archive. */
export function describeFile(file: string, name: string): ArchiveList['files'][number] {
  const hash = createHash('sha256')
  readPieces(file, piece => hash.update(piece))
  return { name, byteCount: statSync(file).size, sha256: hash.digest('hex') }
}

/** @param sources name in the archive to the file it comes from */
export function writeArchive(target: string, list: ArchiveList, sources: ReadonlyMap<string, string>, keys: Keys): void {
  mkdirSync(dirname(target), { recursive: true, mode: 0o700 })
  const handle = openSync(target, 'wx', 0o600)
  let number = 0
  const put = (bytes: Buffer) => {
    const head = Buffer.alloc(4)
    head.writeUInt32BE(number++)
    const sealed = keys.sealBytes(Buffer.concat([head, bytes]))
    const length = Buffer.alloc(4)
    length.writeUInt32BE(sealed.length)
    writeSync(handle, length)
    writeSync(handle, sealed)
  }
  try {
    put(Buffer.from(JSON.stringify(list)))
    for (const { name } of list.files) readPieces(sources.get(name)!, put)
  }
  finally {
    closeSync(handle)
  }
}

/**
 * Unpacks into an empty folder and checks every file against the list.
 * @throws when a chunk was altered, left out or sealed under another key, or a file does not match
 */
export function readArchive(source: string, folder: string, keys: Keys): ArchiveList {
  const handle = openSync(source, 'r')
  let number = 0
  const next = (): Buffer | null => {
    const length = Buffer.alloc(4)
    if (readSync(handle, length) < 4) return null
    const sealed = Buffer.alloc(length.readUInt32BE())
    if (sealed.length > CHUNK_BYTES + 1024 * 1024 || readSync(handle, sealed) < sealed.length) throw new Error('The backup is cut off.')
    const bytes = keys.unsealBytes(sealed)
    if (bytes.readUInt32BE() !== number++) throw new Error('A part of the backup is missing or out of order.')
    return bytes.subarray(4)
  }
  try {
    const list = JSON.parse(String(next())) as ArchiveList
    if (list.format !== ARCHIVE_FORMAT) throw new Error('This is not a backup that this version can read.')
    for (const file of list.files) unpack(file, folder, next)
    return list
  }
  finally {
    closeSync(handle)
  }
}

function unpack(file: ArchiveList['files'][number], folder: string, next: () => Buffer | null): void {
  const target = normalize(join(folder, file.name))
  if (!target.startsWith(normalize(folder) + sep)) throw new Error('The backup names a file outside its folder.')
  mkdirSync(dirname(target), { recursive: true, mode: 0o700 })
  const handle = openSync(target, 'wx', 0o600)
  const hash = createHash('sha256')
  try {
    for (let left = file.byteCount; left > 0;) {
      const piece = next()
      if (!piece) throw new Error('The backup is cut off.')
      writeSync(handle, piece)
      hash.update(piece)
      left -= piece.length
    }
  }
  finally {
    closeSync(handle)
  }
  if (hash.digest('hex') !== file.sha256) throw new Error(`The file ${file.name} does not match the list of the backup.`)
}
