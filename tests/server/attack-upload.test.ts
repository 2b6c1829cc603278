import { randomBytes } from 'node:crypto'
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
