import { createServer, type Server } from 'node:http'
import { deflateSync } from 'node:zlib'
import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import type { AddressInfo } from 'node:net'
import { createApp, createRouter, defineEventHandler, toNodeListener } from 'h3'
import sharp from 'sharp'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import readUploadRoute from '#server/api/uploads/[id].get'
import sendRoute from '#server/api/referrals/[id]/uploads.post'
import { checkUpload, pdfPages } from '#server/services/check-upload'
import { safeName, removeUpload } from '#server/services/store-upload'
import { fileHeaders } from '#server/utils/file-headers'
import { guardRequest } from '#server/utils/guard-request'
import { viewReferral } from '#server/services/view-referral'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'
import { cookieFor } from './http'

const t = await testContext()
const c = await clinic(t)
const referral = await c.draft()
const cookie = await cookieFor(t, c.technologistUser)
const pdf = (inside = '', pages = 1) => Buffer.from(`%PDF-1.4\n1 0 obj<</Type /Pages /Count ${pages} /Kids []>>endobj\n2 0 obj<</Type /Page ${inside}>>endobj\ntrailer<<>>\n%%EOF\n`)
/** Objects that stand packed in an object stream, as most programs write them today. */
const packed = (inside: string, { name = 'ObjStm', data = deflateSync(Buffer.from(inside)) } = {}) => Buffer.concat([Buffer.from(`%PDF-1.5\n3 0 obj<</Type /${name} /Filter /FlateDecode /Length ${data.length}>>stream\r\n`), data, Buffer.from('\r\nendstream endobj\n%%EOF\n')])
const picture = (format: 'png' | 'jpeg', width = 40, height = 20) => sharp({ create: { width, height, channels: 3, background: '#888888' } }).withExif({ IFD0: { Artist: 'SECRET-ARTIST' } })[format]().toBuffer()

let server: Server
let origin: string
beforeAll(async () => {
  const app = createApp()
  app.use(defineEventHandler((event) => {
    event.context.services = t.context
    return guardRequest(event)
  }))
  app.use(createRouter().post('/api/referrals/:id/uploads', sendRoute).get('/api/uploads/:id', readUploadRoute))
  server = createServer(toNodeListener(app)).listen(0, '127.0.0.1')
  await new Promise(resolve => server.once('listening', resolve))
  origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`
})
afterAll(() => new Promise(resolve => server.close(resolve)))

async function send(bytes: Uint8Array, name: string, type = 'application/octet-stream', id = referral) {
  const form = new FormData()
  form.append('file', new Blob([new Uint8Array(bytes)], { type }), name)
  const response = await fetch(`${origin}/api/referrals/${id}/uploads`, { method: 'POST', body: form, headers: { cookie, origin: t.settings.appOrigin } })
  return { status: response.status, body: await response.json() as Record<string, unknown> & { id: string } }
}
const stored = () => {
  try {
    return readdirSync(join(t.dataDir, 'uploads'))
  }
  catch { return [] }
}

describe('a file is what its bytes are, not what its name says', () => {
  it('a PDF with packed objects is kept when nothing in them forbids it', async () => {
    expect((await send(packed('<</Type /Pages /Count 2>>'), 'packed.pdf')).status).toBe(200)
  })
  it('a PDF named .png is kept as a PDF', async () => {
    const answer = await send(pdf(), 'scan.png', 'image/png')
    expect(answer).toMatchObject({ status: 200, body: { mediaType: 'application/pdf', originalName: 'scan.pdf' } })
  })
  it.each([
    { name: 'letter.pdf', bytes: Buffer.from('<html><script>alert(1)</script>') },
    { name: 'letter.pdf', bytes: Buffer.from('MZ\u0090\u0000 a program') },
    { name: 'letter.png', bytes: Buffer.from('GIF89a\u0001\u0000\u0001\u0000\u0000\u0000\u0000;', 'latin1') },
    { name: 'letter.svg', bytes: Buffer.from('<svg xmlns="http://www.w3.org/2000/svg"></svg>') },
    { name: 'letter.pdf', bytes: Buffer.from('%PDF-1.4 and then nothing') },
    { name: 'letter.pdf', bytes: pdf('/OpenAction <</S /JavaScript /JS (app.alert(1))>>') },
    { name: 'letter.pdf', bytes: pdf('/AA <</S /Launch>>') },
    { name: 'letter.pdf', bytes: pdf('', 5000) },
    { name: 'packed-program.pdf', bytes: packed('<</S /JavaScript /JS (app.alert(1))>>') },
    { name: 'packed-pages.pdf', bytes: packed('<</Type /Pages /Count 5000>>') },
    { name: 'packed-file.pdf', bytes: packed('<</Names /EmbeddedFiles>>') },
    { name: 'packed-unreadable.pdf', bytes: packed('', { data: Buffer.from('encrypted, not deflated') }) },
    { name: 'packed-bomb.pdf', bytes: packed('', { data: deflateSync(Buffer.alloc(40 * 1024 * 1024)) }) },
    { name: 'packed-under-another-name.pdf', bytes: packed('<</S /JavaScript>>', { name: 'Obj#53tm' }) },
    { name: 'letter.png', bytes: Buffer.from('89504e470d0a1a0a0000000d49484452000000010000000108060000001f15c489', 'hex') },
  ])('refuses $name that begins with $bytes.length bytes of something else, and keeps nothing', async ({ name, bytes }) => {
    const before = stored().length
    expect(await send(bytes, name)).toMatchObject({ status: 415, body: { code: 'wrong-file-type' } })
    expect(stored()).toHaveLength(before)
  })
  it('refuses a picture of too many pixels', async () => {
    const flood = await sharp({ create: { width: 9000, height: 5000, channels: 3, background: '#fff' } }).png({ compressionLevel: 9 }).toBuffer()
    expect(flood.length).toBeLessThan(1_000_000)
    await expect(checkUpload(flood)).rejects.toMatchObject({ code: 'wrong-file-type', options: { message: expect.stringContaining('40 million') } })
  })
})

describe('size', () => {
  it('10 MB and one byte is refused, and the answer arrives', async () => {
    const before = stored().length
    expect(await send(Buffer.alloc(10 * 1024 * 1024 + 1, 1), 'big.pdf')).toMatchObject({ status: 413, body: { code: 'too-large' } })
    expect(stored()).toHaveLength(before)
  })
  it('a body that does not announce its length is refused where it passes the limit', async () => {
    let sent = 0
    const endless = new ReadableStream({
      pull(controller) {
        sent += 65_536
        if (sent > 40 * 1024 * 1024) controller.close()
        else controller.enqueue(new Uint8Array(65_536))
      },
    })
    const response = await fetch(`${origin}/api/referrals/${referral}/uploads`, { method: 'POST', body: endless, duplex: 'half', headers: { cookie, 'origin': t.settings.appOrigin, 'content-type': 'multipart/form-data; boundary=x' } } as RequestInit)
    expect(response.status).toBe(413)
  })
  it.each([['no form at all', 'text/plain', 'hello'], ['a form without a file', 'multipart/form-data; boundary=x', '--x--\r\n']])('%s asks for a file', async (_what, type, body) => {
    const response = await fetch(`${origin}/api/referrals/${referral}/uploads`, { method: 'POST', body, headers: { cookie, 'origin': t.settings.appOrigin, 'content-type': type } })
    expect(response.status).toBe(422)
  })
})

describe('keeping', () => {
  it.each(['png', 'jpeg'] as const)('a %s is written anew without what else was in it, sealed under a random name, and comes back', async (format) => {
    const bytes = await picture(format)
    expect(bytes.includes('SECRET-ARTIST')).toBe(true)
    const before = stored()
    const { body } = await send(bytes, '../../etc/Röntgen "1".jpeg')
    const [name] = stored().filter(file => !before.includes(file))
    expect(name).toMatch(/^[0-9a-f]{48}$/)
    const onDisk = readFileSync(join(t.dataDir, 'uploads', name!))
    for (const trace of ['SECRET-ARTIST', 'PNG', 'JFIF']) expect(onDisk.includes(trace)).toBe(false)
    const response = await fetch(`${origin}/api/uploads/${body.id}`, { headers: { cookie } })
    const back = Buffer.from(await response.arrayBuffer())
    expect(back.includes('SECRET-ARTIST')).toBe(false)
    expect(await sharp(back).metadata()).toMatchObject({ format, width: 40, height: 20 })
    expect(response.headers.get('content-security-policy')).toBe('sandbox; default-src \'none\'')
    expect(response.headers.get('x-content-type-options')).toBe('nosniff')
    expect(response.headers.get('cache-control')).toBe('no-store')
    expect(response.headers.get('content-disposition')).toBe(`inline; filename="R_ntgen 1.${format === 'png' ? 'png' : 'jpg'}"; filename*=UTF-8''R%C3%B6ntgen%201.${format === 'png' ? 'png' : 'jpg'}`)
  })
  it('a removed file is gone from list, address and disk, and stays in the trail', async () => {
    const { body } = await send(pdf(), 'wrong-patient.pdf')
    const before = stored().length
    await removeUpload(c.admin, body.id)
    expect(stored()).toHaveLength(before - 1)
    expect((await fetch(`${origin}/api/uploads/${body.id}`, { headers: { cookie } })).status).toBe(404)
    expect((await viewReferral(c.admin, referral)).uploads.map(upload => upload.id)).not.toContain(body.id)
    expect((await eventNames(t, referral)).slice(-1)).toEqual(['upload.removed'])
    await expect(removeUpload(c.admin, body.id)).rejects.toMatchObject({ code: 'not-found' })
  })
  it('a referral holds 20 files at most, and the 21st leaves nothing on the disk', async () => {
    const id = await c.draft()
    for (let n = 0; n < 20; n++) expect((await send(pdf(), 'a.pdf', '', id)).status).toBe(200)
    const before = stored().length
    expect((await send(pdf(), 'a.pdf', '', id)).status).toBe(422)
    expect(stored()).toHaveLength(before)
  })
})

describe('names', () => {
  it.each([
    { sent: 'scan.pdf', extension: 'pdf', name: 'scan.pdf' },
    { sent: '../../../etc/passwd', extension: 'pdf', name: 'passwd.pdf' },
    { sent: 'C:\\letters\\scan.pdf.exe', extension: 'pdf', name: 'scan.pdf.pdf' },
    { sent: 'a\r\nSet-Cookie: x=1.png', extension: 'png', name: 'aSet-Cookie x=1.png' },
    { sent: '.htaccess', extension: 'jpg', name: 'letter.jpg' },
    { sent: '', extension: 'pdf', name: 'letter.pdf' },
    { sent: 'dopis žádost č. 5.pdf', extension: 'pdf', name: 'dopis žádost č. 5.pdf' },
    { sent: 'gnp\u202Efdp.exe', extension: 'pdf', name: 'gnpfdp.pdf' },
  ])('$sent becomes $name', ({ sent, extension, name }) => expect(safeName(sent, extension)).toBe(name))
  it('a name cannot leave its header', () => {
    expect(fileHeaders({ mediaType: 'application/pdf', name: 'a"; filename="b.html', byteCount: 1 })['Content-Disposition']).toBe('attachment; filename="a__ filename__b.html"; filename*=UTF-8\'\'a%22%3B%20filename%3D%22b.html')
  })
})

it.each([{ text: '/Type /Page /Type/Page /Type /Pages', pages: 2 }, { text: '/Count 12 /Type /Page', pages: 12 }, { text: '', pages: 0 }])('$text has $pages pages', ({ text, pages }) => expect(pdfPages(text)).toBe(pages))
