import { randomBytes } from 'node:crypto'
import sharp from 'sharp'
import { describe, expect, it } from 'vitest'
import { checkUpload } from '#server/services/check-upload'
import { safeName } from '#server/services/store-upload'

const pdf = (inside: string | Buffer) => Buffer.concat([Buffer.from('%PDF-1.4\n1 0 obj<</Type /Pages /Count 1 /Kids []>>endobj\n2 0 obj<</Type /Page>>\n'), Buffer.from(inside), Buffer.from('\nendobj\ntrailer<<>>\n%%EOF\n')])

describe('the name of a file', () => {
  it.each([
    ['dots', `x${'.'.repeat(300_000)}${'y'.repeat(20)}`],
    ['spaces', `x${' '.repeat(300_000)}y`],
    ['slashes', `${'/'.repeat(300_000)}y`],
  ])('of 300,000 %s costs nothing: one such name must not stop the server for everybody', (_what, name) => {
    const before = performance.now()
    expect(safeName(name, 'png').length).toBeLessThanOrEqual(104)
    expect(performance.now() - before).toBeLessThan(200)
  })
  it('keeps what people called it', () => {
    expect(safeName('Überweisung Nováková.pdf', 'pdf')).toBe('Überweisung Nováková.pdf')
  })
})

describe('a PDF', () => {
  it('with a scanned picture is taken, whatever its compressed bytes happen to spell', async () => {
    const scan = Buffer.concat([Buffer.from('3 0 obj<</Length 60012>>stream\n'), randomBytes(30_000), Buffer.from('/JS\x8f\x01'), randomBytes(30_000).map(byte => byte === 0x2f ? 0x30 : byte), Buffer.from('\nendstream endobj')])
    await expect(checkUpload(pdf(scan))).resolves.toMatchObject({ mediaType: 'application/pdf' })
  })
  it.each([
    '/OpenAction <</S /JavaScript /JS (app.alert(1))>>',
    '/OpenAction <</S /Rendition /JS (app.alert(1))>>',
    '/OpenAction <</S /Rendition /JS 5 0 R>>',
    '/OpenAction <</S /Rendition /JS<616c657274>>>',
    '/OpenAction <</S /J#61vaScript /J#53 (app.alert(1))>>',
    '/AA <</O <</S /L#61unch /F (cmd.exe)>> >>',
    '/Names <</Embedded#46iles 4 0 R>>',
  ])('with a program or a file inside is refused, its names spelled out or not: %s', async (inside) => {
    await expect(checkUpload(pdf(inside))).rejects.toMatchObject({ code: 'wrong-file-type' })
  })
})

it('pictures are decoded one at a time: a small file can hold 40 million pixels, and eight of them took 1.8 GB at once', async () => {
  const bytes = await sharp({ create: { width: 2000, height: 2000, channels: 3, background: '#888888' } }).jpeg({ progressive: true }).toBuffer()
  let most = 0
  const watch = setInterval(() => {
    const { queue, process } = sharp.counters()
    most = Math.max(most, queue + process)
  }, 1)
  const kept = await Promise.all(Array.from({ length: 5 }, () => checkUpload(bytes)))
  clearInterval(watch)
  expect(kept.every(file => file.mediaType === 'image/jpeg')).toBe(true)
  expect(most).toBe(1)
})
it('a damaged picture does not hold up the next one', async () => {
  const good = await sharp({ create: { width: 20, height: 20, channels: 3, background: '#888888' } }).png().toBuffer()
  const [bad, next] = await Promise.allSettled([checkUpload(good.subarray(0, good.length - 30)), checkUpload(good)])
  expect([bad.status, next.status]).toEqual(['rejected', 'fulfilled'])
})
