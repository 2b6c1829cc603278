import { createHash, createVerify, generateKeyPairSync } from 'node:crypto'
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, describe, expect, it } from 'vitest'
import { runOutboxOnce } from '#server/services/run-outbox'
import { mailSettings } from '#server/services/mail-settings'
import { closePdfThread } from '#server/pdf/render-pdf'
import { testContext } from './helpers'
import { readingRoom } from './reading-helpers'

/** DKIM (RFC 6376), checked by a reading of the standard that shares nothing with what signs. */
const { privateKey, publicKey } = generateKeyPairSync('rsa', { modulusLength: 2048, privateKeyEncoding: { type: 'pkcs8', format: 'pem' }, publicKeyEncoding: { type: 'spki', format: 'pem' } })
const folder = mkdtempSync(join(tmpdir(), 'orthodrome-dkim-'))
const keyFile = join(folder, 'dkim.pem')
writeFileSync(keyFile, privateKey)
afterAll(async () => {
  rmSync(folder, { recursive: true, force: true })
  await closePdfThread()
})

const relaxHeader = (line: string) => {
  const [, name, value] = /^([^:]+):([\s\S]*)$/.exec(line)!
  return `${name!.toLowerCase().trim()}:${value!.replace(/\r\n/g, '').replace(/[ \t]+/g, ' ').trim()}`
}
/** Section 3.4.4: spaces at line ends go, runs of them become one, empty lines at the end go. */
const relaxBody = (body: string) => `${body.split('\r\n').map(line => line.replace(/[ \t]+/g, ' ').replace(/ $/, '')).join('\r\n').replace(/(?:\r\n)+$/, '')}\r\n`

/** Whether the signature fits the message: section 6.1. */
function verifies(message: Buffer): boolean {
  const text = message.toString('latin1')
  const end = text.indexOf('\r\n\r\n')
  const headers = text.slice(0, end).split(/\r\n(?![ \t])/)
  const own = headers.find(line => /^dkim-signature:/i.test(line))!
  const tags = Object.fromEntries(own.replace(/^[^:]+:/, '').replace(/\r\n/g, '').split(';').map(part => part.trim()).filter(Boolean).map(part => [part.slice(0, part.indexOf('=')).trim(), part.slice(part.indexOf('=') + 1).replace(/\s+/g, '')]))
  const bodyHash = createHash('sha256').update(Buffer.from(relaxBody(text.slice(end + 4)), 'latin1')).digest('base64')
  const signed = tags.h!.split(':').map(name => headers.find(line => line.toLowerCase().startsWith(`${name.toLowerCase()}:`))).filter(line => line !== undefined).map(relaxHeader)
  const data = [...signed, relaxHeader(own.replace(/(\bb=)[^;]*/, '$1'))].join('\r\n')
  return tags.bh === bodyHash && createVerify('sha256').update(Buffer.from(data, 'latin1')).verify(publicKey, tags.b!, 'base64')
}

describe('a signed mail', async () => {
  const config = { mailFrom: 'Clinic <reports@clinic.example>', bounceImapUrl: '', bounceAddress: '', dkimKeyFile: keyFile, dkimSelector: 'orthodrome', dkimDomain: '' }
  const t = await testContext({ ...mailSettings(config), mailFrom: config.mailFrom })
  const room = await readingRoom(t)
  const taken: Buffer[] = []
  const transport = { send: async (_envelope: unknown, message: Buffer, beforeLastByte: () => Promise<void>) => {
    await beforeLastByte()
    taken.push(message)
    return { kind: 'accepted' as const }
  }, close: () => undefined }

  it('carries a signature of the sender\'s domain that fits it, and fits nothing that was altered', async () => {
    await room.signed()
    t.clock.minutes(2)
    await runOutboxOnce(t.context, { transport, owner: 'test' })
    const message = taken[0]!
    const text = message.toString('latin1')
    expect(text).toMatch(/^DKIM-Signature: [^]*d=clinic\.example/)
    expect(text).toContain('s=orthodrome')
    for (const name of ['from', 'to', 'subject', 'message-id', 'date']) expect(/\bh=([^;]*)/.exec(text.replace(/\r\n[ \t]/g, ''))![1]!.toLowerCase().split(':')).toContain(name)
    expect(verifies(message)).toBe(true)
    expect(verifies(Buffer.from(text.replace('passphrase', 'passphrese'), 'latin1'))).toBe(false)
    expect(verifies(Buffer.from(text.replace(/Subject: A nerve/, 'Subject: The nerve'), 'latin1'))).toBe(false)
  })
  it.each([
    ['a selector is missing', { ...config, dkimSelector: '' }, 'DKIM_SELECTOR'],
    ['the file holds no key', { ...config, dkimKeyFile: 'package.json' }, 'no private key'],
    ['the domain cannot be one', { ...config, dkimDomain: 'not a domain' }, 'names as DNS'],
    ['the mailbox is none', { ...config, bounceImapUrl: 'https://mail.example' }, 'BOUNCE_IMAP_URL'],
    ['the sender is none', { ...config, bounceAddress: 'nobody' }, 'BOUNCE_ADDRESS'],
  ])('the program does not start when %s', (_what, wrong, says) => expect(() => mailSettings(wrong)).toThrow(says))
})
