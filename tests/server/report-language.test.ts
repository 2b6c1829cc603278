import { afterAll, describe, expect, it } from 'vitest'
import { closePdfThread, renderPdf } from '#server/pdf/render-pdf'
import { reportSource } from '#server/services/make-report-pdf'
import { approvePolicy, proposePolicy } from '#server/services/policies'
import { saveDraft } from '#server/services/save-draft'
import { signReport } from '#server/services/sign-report'
import { takeStudy } from '#server/services/take-study'
import { viewReading } from '#server/services/view-reading'
import { reportBlocks } from '#shared/report/index'
import type { ReportSnapshot } from '#shared/schemas/report'
import { TEST_NOW, testContext } from './helpers'
import { finishedDraft, readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
afterAll(closePdfThread)
const german = { reportLanguage: 'de' } as const
const inGerman = () => finishedDraft({
  impression: [{ id: 'line-1', words: 'Läsion des N. medianus rechts am Handgelenk.', nerve: 'median', pattern: null, side: 'right', degree: null, abnormal: true }],
  correlation: 'Passt zur Anamnese.', limitations: ['Dünne Fasern werden nicht erfasst'],
})

describe('a report in the language of its referral', () => {
  it('drafts, checks, freezes and prints in German', async () => {
    const id = await room.handedOver(german)
    await takeStudy(room.reader, id)
    const before = await viewReading(room.reader, id)
    expect(before.findings[0]!.text).toMatch(/^RECHTS N\. medianus motorisch, abductor pollicis brevis: Latenz/)
    expect(before.assessment?.findings.map(finding => finding.text)).toEqual(before.findings.map(finding => finding.text))
    await saveDraft(room.reader, { studyId: id, draft: inGerman(), revision: 0 })
    const { reportId } = await signReport(room.reader, await room.lookedAt(id))
    const row = await t.context.db.selectFrom('reportVersion').selectAll().where('reportId', '=', reportId).executeTakeFirstOrThrow()
    const snapshot = JSON.parse(row.snapshotJson) as ReportSnapshot
    expect(snapshot.language).toBe('de')
    expect(snapshot.findings.every(finding => /RECHTS|LINKS/.test(finding.text))).toBe(true)
    const bytes = await renderPdf(await reportSource(t.context.db, row))
    expect(Buffer.from(bytes).toString('latin1')).toContain('/Lang (de)')
  })

  it('an edited German sentence is kept, and marked when its row changes', async () => {
    const id = await room.handedOver(german)
    await takeStudy(room.reader, id)
    const { findings, assessment } = await viewReading(room.reader, id)
    const { fingerprint } = assessment!.findings[0]!
    const { key } = findings[0]!
    await saveDraft(room.reader, { studyId: id, draft: { ...inGerman(), editedFindings: [{ key, text: 'Mein Satz.', fingerprint, left: false }] }, revision: 0 })
    expect((await viewReading(room.reader, id)).findings[0]).toMatchObject({ text: 'Mein Satz.', edited: true, needsReview: false })
    const other = await room.handedOver(german)
    await takeStudy(room.reader, other)
    await saveDraft(room.reader, { studyId: other, draft: { ...inGerman(), editedFindings: [{ key: (await viewReading(room.reader, other)).findings[0]!.key, text: 'Mein Satz.', fingerprint: 'another', left: false }] }, revision: 0 })
    expect((await viewReading(room.reader, other)).findings[0]).toMatchObject({ text: 'Mein Satz.', needsReview: true })
  })

  it('the caution stands in German as the organisation worded it, and nothing but the empty field leaves it out', async () => {
    const disclaimer = 'Our own caution: these results support and do not replace clinical judgement. Limits depend on technique.'
    const proposed = (words: string) => ({ name: 'report-form', siteId: null, body: { paperSize: 'A4', disclaimer, disclaimerIn: { de: words } }, note: 'worded in German', effectiveOn: TEST_NOW.slice(0, 10) } as const)
    await expect(proposePolicy(room.director, proposed('Zu kurz.'))).rejects.toMatchObject({ code: 'not-valid' })
    const own = 'Eigener Hinweis: Die Ergebnisse stützen das klinische Urteil und ersetzen es nicht. Grenzwerte hängen von der Technik ab.'
    const { id: policyId } = await proposePolicy(room.director, proposed(own))
    await approvePolicy(t.as(await t.makeUser({ roles: ['medical-director'] })), { id: policyId })
    const id = await room.handedOver(german)
    await takeStudy(room.reader, id)
    await saveDraft(room.reader, { studyId: id, draft: inGerman(), revision: 0 })
    const { reportId } = await signReport(room.reader, await room.lookedAt(id))
    const row = await t.context.db.selectFrom('reportVersion').selectAll().where('reportId', '=', reportId).executeTakeFirstOrThrow()
    expect((JSON.parse(row.snapshotJson) as ReportSnapshot).organisation).toMatchObject({ disclaimer, disclaimerTranslated: own })
    const printed = reportBlocks(await reportSource(t.context.db, row)).map(block => JSON.stringify(block)).join(' ')
    expect([printed.includes(own), printed.includes('Our own caution')]).toEqual([true, false])
  })

  it('the wrong side in German words refuses the signature', async () => {
    const id = await room.handedOver(german)
    await takeStudy(room.reader, id)
    const wrong = { ...inGerman(), impression: [{ ...inGerman().impression[0]!, words: 'Läsion des N. medianus LINKS.', side: null, nerve: null }] }
    await saveDraft(room.reader, { studyId: id, draft: wrong, revision: 0 })
    await expect(signReport(room.reader, await room.lookedAt(id))).rejects.toMatchObject({ code: 'not-ready' })
  })
})
