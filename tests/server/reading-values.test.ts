import { describe, expect, it } from 'vitest'
import { saveCells } from '#server/services/save-cells'
import { addRun, removeRun } from '#server/services/save-run'
import { flushViews } from '#server/services/record-view'
import { saveDraft } from '#server/services/save-draft'
import { signReport } from '#server/services/sign-report'
import { takeStudy } from '#server/services/take-study'
import { viewReading } from '#server/services/view-reading'
import { approvePolicy, proposePolicy } from '#server/services/policies'
import { testContext } from './helpers'
import { finishedDraft, readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)

describe('needle findings of the reader', () => {
  const cell = (rowId: string, entry: string | null, revision = 0) => ({ saveId: crypto.randomUUID(), rowId, field: 'ordinal:fibrillations', entry, revision })
  it('are entered while the study is with the reader, by nobody else, and nothing but needle findings', async () => {
    const id = await room.handedOver()
    await takeStudy(room.reader, id)
    const muscle = { id, technique: 'needle-apb', side: 'right' as const }
    await expect(addRun(room.other, muscle)).rejects.toMatchObject({ code: 'wrong-state' })
    await expect(addRun(room.technologist, muscle)).rejects.toMatchObject({ code: 'wrong-state' })
    await expect(addRun(room.reader, { ...muscle, technique: 'median-motor-apb' })).rejects.toMatchObject({ code: 'wrong-state' })
    const { runId } = await addRun(room.reader, muscle)
    const rowId = (await room.study(id)).study.runs.find(run => run.id === runId)!.rows[0]!.id
    expect((await saveCells(room.reader, { id, cells: [cell(rowId, '2+')] })).cells[0]).toMatchObject({ saved: true })
    expect((await saveCells(room.reader, { id, cells: [cell(rowId, '9+', 1)] })).cells[0]).toMatchObject({ saved: false, because: 'not-valid' })
    await expect(saveCells(room.other, { id, cells: [cell(rowId, '3+', 1)] })).rejects.toMatchObject({ code: 'wrong-state' })
    const { findings } = await viewReading(room.reader, id)
    expect(findings.find(finding => finding.runIds.includes(runId))?.text).toContain('2+')
    const motor = (await room.study(id)).study.runs.find(run => run.technique === 'median-motor-apb')!
    await expect(removeRun(room.reader, { id, runId: motor.id, reason: 'not mine to remove' })).rejects.toMatchObject({ code: 'wrong-state' })
    await removeRun(room.reader, { id, runId, reason: 'wrong muscle' })
  })
  it('entered after the check refuse the signature that was made on the earlier numbers', async () => {
    const id = await room.written()
    const looked = await room.lookedAt(id)
    await addRun(room.reader, { id, technique: 'needle-fdi', side: 'right' })
    await expect(signReport(room.reader, looked)).rejects.toMatchObject({ code: 'changed-meanwhile' })
  })
})

describe('earlier studies of the same person', () => {
  it('stand beside this one, with the band that repeated measurement makes, and the look at them is kept', async () => {
    const first = await room.signed()
    const { patientId } = (await room.study(first.studyId)).record
    const second = await room.handedOver()
    const { record } = await room.study(second)
    await t.db.updateTable('study').set({ patientId }).where('id', '=', second).execute()
    await t.db.updateTable('referral').set({ patientId }).where('id', '=', record.referralId).execute()
    const { assessment } = await viewReading(room.reader, second)
    const latency = assessment?.changes?.find(change => change.quantity === 'latencyMs' && change.studyId === first.studyId)
    expect(latency).toMatchObject({ print: latency!.printEarlier, changePercent: { kind: 'value', value: 0 }, bandPercent: 10, beyondBand: 'no' })
    await flushViews(t.context)
    const view = await t.db.selectFrom('viewEvent').selectAll().where('subject', '=', 'report').where('subjectId', '=', first.reportId).orderBy('seq', 'desc').executeTakeFirstOrThrow()
    expect(view.because).toBe(`earlier study beside ${record.number}`)
    expect((await viewReading(room.reader, first.studyId)).assessment).toBeUndefined()
  })
  it('are not those of another person', async () => {
    await room.signed()
    expect((await viewReading(room.reader, await room.handedOver())).assessment).toBeUndefined()
  })
})

describe('the words of the organisation', () => {
  it('an approved phrase is suggested where its conditions are met, and is never in the draft by itself', async () => {
    const director = t.as(await t.makeUser({ roles: ['medical-director'] }))
    const body = { phrases: [{ id: 'median', texts: { en: 'Median neuropathy at the wrist, {side}.' }, conditions: [{ kind: 'nerve-flagged', nerve: 'median' }], nerve: 'median', abnormal: true }] }
    const { id } = await proposePolicy(room.reader, { name: 'phrases', siteId: null, body, note: 'First phrases', effectiveOn: '2026-12-02' })
    const studyId = await room.handedOver()
    expect((await viewReading(room.reader, studyId)).phrases).toEqual([])
    await approvePolicy(director, { id })
    const view = await viewReading(room.reader, studyId)
    expect(view.phrases).toMatchObject([{ id: 'median@1', words: 'Median neuropathy at the wrist, RIGHT.', side: 'right', fits: true }])
    expect(view.draft.impression).toEqual([])
  })
})

describe('an answer before signing', () => {
  it('is asked for again when a value changed', async () => {
    const id = await room.handedOver()
    await takeStudy(room.reader, id)
    const wrong = finishedDraft({ impression: [{ id: 'l', words: 'Left ulnar neuropathy.', nerve: 'ulnar', pattern: null, side: 'left', degree: null, abnormal: true }] })
    await saveDraft(room.reader, { studyId: id, draft: wrong, revision: 0 })
    const open = async () => (await viewReading(room.reader, id)).checks.filter(check => check.key.startsWith('side/') && !check.resolvedBecause)
    const [asked] = await open()
    await saveDraft(room.reader, { studyId: id, draft: { ...wrong, resolved: [{ key: asked!.key, reason: 'Clinically certain', about: asked!.about! }] }, revision: 1 })
    expect(await open()).toEqual([])
    const median = (await room.study(id)).study.runs.find(run => run.technique === 'median-sensory-d2' && run.side === 'right')!
    await t.db.updateTable('studyCell').set({ entryJson: '3.0' }).where('rowId', '=', median.rows[0]!.id).where('field', '=', 'onsetLatencyMs').execute()
    expect((await open()).map(check => check.key)).toEqual([asked!.key])
  })
})
