import { getRequestHeader, type H3Event } from 'h3'
import { DomainError } from '#shared/errors'

export interface SentFile { name: string, bytes: Uint8Array }

/** Boundaries and part headers around the file itself. */
const OVERHEAD_BYTES = 16 * 1024

/**
 * Reads the one file of a multipart form, never more than the limit: a longer body is refused at its announced length,
 * or where it passes the limit.
 * @throws DomainError 'too-large' or 'not-valid'
 */
export async function readSentFile(event: H3Event, limitBytes: number): Promise<SentFile> {
  const type = getRequestHeader(event, 'content-type') ?? ''
  if (!/^multipart\/form-data;\s*boundary=/i.test(type)) throw new DomainError('not-valid', { fields: [{ path: 'file', message: 'Choose a file.' }] })
  const body = await readAtMost(event, limitBytes + OVERHEAD_BYTES)
  const form = await new Response(new Uint8Array(body), { headers: { 'content-type': type } }).formData().catch(() => undefined)
  const files = form ? [...form.values()].filter(value => typeof value !== 'string') : []
  if (files.length !== 1 || !files[0] || files[0].size === 0) throw new DomainError('not-valid', { fields: [{ path: 'file', message: 'Choose one file.' }] })
  if (files[0].size > limitBytes) throw new DomainError('too-large')
  return { name: files[0].name, bytes: new Uint8Array(await files[0].arrayBuffer()) }
}

function readAtMost(event: H3Event, limit: number): Promise<Buffer> {
  const { req } = event.node
  const refuse = () => {
    // What still comes is thrown away unread, so that the answer reaches whoever is still sending.
    req.resume()
    return new DomainError('too-large')
  }
  if (Number(getRequestHeader(event, 'content-length') ?? 0) > limit) return Promise.reject(refuse())
  return new Promise((resolve, reject) => {
    const chunks: Buffer[] = []
    let size = 0
    req.on('data', (chunk: Buffer) => {
      size += chunk.length
      if (size <= limit) chunks.push(chunk)
      else reject(refuse())
    })
    req.on('end', () => resolve(Buffer.concat(chunks)))
    req.on('error', reject)
    req.on('aborted', () => reject(new DomainError('not-valid', { log: 'the upload was broken off' })))
  })
}
