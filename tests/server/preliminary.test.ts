import { execFileSync } from 'node:child_process'
import { mkdtempSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, expect, it } from 'vitest'
import { closePdfThread } from '#server/pdf/render-pdf'
import { printPreliminary } from '#server/services/print-preliminary'
import { testContext } from './helpers'
import { readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
afterAll(closePdfThread)

const textOf = (bytes: Uint8Array) => {
  const path = join(mkdtempSync(join(tmpdir(), 'orthodrome-preliminary-')), 'print.pdf')
  writeFileSync(path, bytes)
  return { text: execFileSync('pdftotext', ['-layout', path, '-'], { encoding: 'utf8' }), title: execFileSync('pdfinfo', [path], { encoding: 'utf8' }) }
}

it('an unsigned study prints as preliminary: marked, unsigned, logged, and nothing that could be sent comes of it', async () => {
  const id = await room.written()
  const { text, title } = textOf(await printPreliminary(room.reader, id))
  expect(text).toContain('Preliminary: not signed. Do not act on this print.')
  expect(text).toContain('Not signed.')
  expect(text).not.toContain('Fingerprint')
  for (const page of text.split('\f').filter(one => one.trim())) expect(page).toMatch(/PRELIMINARY.* · page/)
  expect(title).toMatch(/Title: .*preliminary/)
  const events = await t.context.db.selectFrom('auditEvent').select(['name', 'subjectId']).where('name', '=', 'report.preliminary-printed').execute()
  expect(events).toEqual([{ name: 'report.preliminary-printed', subjectId: id }])
  for (const table of ['reportVersion', 'reportPdf', 'delivery'] as const) expect(await t.context.db.selectFrom(table).selectAll().execute()).toEqual([])
})

it('a signed study has no preliminary print any more', async () => {
  const { studyId } = await room.signed()
  await expect(printPreliminary(room.reader, studyId)).rejects.toMatchObject({ code: 'wrong-state' })
})
