import { describe, expect, it } from 'vitest'
import { addAbsence } from '#server/services/keep-absence'
import { saveDraft } from '#server/services/save-draft'
import { signReport } from '#server/services/sign-report'
import { assignStudy, possibleReaders, takeStudy } from '#server/services/take-study'
import { viewReading } from '#server/services/view-reading'
import { viewReadingQueue } from '#server/services/view-reading-queue'
import { readingQuerySchema } from '#shared/schemas/reading'
import { roleMay } from '#shared/permissions'
import type { ServiceContext } from '#server/services/context'
import { TEST_NOW, testContext } from './helpers'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
const asked = (query: object) => readingQuerySchema.parse(query)
const queue = (by: ServiceContext, query: object = {}) => viewReadingQueue(by, [room.site.id], asked({ state: 'handed-over', ...query }))
const ids = async (by: ServiceContext, query: object = {}) => (await queue(by, query)).rows.map(row => row.studyId)

describe('the queue', () => {
  it('shows the covering reader what belongs to one who is away, and says until when', async () => {
    const theirs = await room.handedOver()
    await takeStudy(room.reader, theirs)
    expect(await ids(room.other, { assigned: 'mine' })).toEqual([])
    await addAbsence(room.reader, room.reader.actor.userId!, { fromDay: '2026-12-02', toDay: '2026-12-04', coveredBy: room.other.actor.userId! })
    const { rows } = await queue(room.other, { assigned: 'mine' })
    expect(rows).toMatchObject([{ studyId: theirs, readerName: 'Rea Sample', away: { toDay: '2026-12-04', coveredByName: 'Otto Sample' } }])
    t.clock.minutes(3 * 24 * 60)
    expect(await ids(room.other, { assigned: 'mine' })).toEqual([])
    expect((await queue(room.other)).rows[0]).toMatchObject({ away: null })
    t.clock.set(TEST_NOW)
    await t.db.updateTable('study').set({ stateSince: '2026-11-29T20:00:00.000Z' }).where('id', '=', theirs).execute()
  })
  it('counts what waits too long, and shows only that when asked', async () => {
    const t0 = (await queue(room.reader)).waiting
    expect(t0).toEqual({ all: 1, older: [{ hours: 24, count: 1 }, { hours: 48, count: 1 }, { hours: 168, count: 0 }] })
    const fresh = await room.handedOver({ urgency: 'urgent', urgencyReason: 'Weakness grows by the day' })
    expect((await queue(room.reader)).waiting).toMatchObject({ all: 2, older: [{ count: 1 }, { count: 1 }, { count: 0 }] })
    expect(await ids(room.reader, { older: 24 })).not.toContain(fresh)
    expect(await ids(room.reader, { urgency: 'urgent' })).toEqual([fresh])
    const { number } = (await room.study(fresh)).record
    expect(await ids(room.reader, { search: number.toLowerCase() })).toEqual([fresh])
    const { band } = { band: (await queue(room.reader, { urgency: 'urgent' })).rows[0]! }
    expect(await ids(room.reader, { search: band.patientName.split(',')[0] })).toContain(fresh)
    expect(await ids(room.reader, { search: 'nobodyhasthisname' })).toEqual([])
  })
})

describe('assignment', () => {
  it('gives a study to a reader of the site, by whoever shares out, and the trail keeps from whom', async () => {
    const id = await room.handedOver()
    await takeStudy(room.reader, id)
    await assignStudy(room.reader, { id, readerId: room.other.actor.userId! })
    expect((await room.study(id)).record.readerId).toBe(room.other.actor.userId)
    const event = await t.db.selectFrom('auditEvent').selectAll().where('name', '=', 'study.assigned').executeTakeFirstOrThrow()
    expect(JSON.parse(event.dataJson)).toEqual({ from: room.reader.actor.userId, to: room.other.actor.userId })
    await expect(saveDraft(room.reader, { studyId: id, draft: finishedDraft(), revision: 0 })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('refuses people who do not read there', async () => {
    const id = await room.handedOver()
    const elsewhere = await t.makeUser({ roles: [{ siteId: (await t.makeSite()).id, role: 'neurologist' }] })
    for (const readerId of [elsewhere.id, room.technologist.actor.userId!]) await expect(assignStudy(room.reader, { id, readerId })).rejects.toMatchObject({ code: 'not-valid' })
    const names = (await possibleReaders(room.reader, id)).map(person => person.name)
    expect(names).toEqual(expect.arrayContaining(['Otto Sample', 'Rea Sample']))
    expect(names).not.toContain(room.technologist.actor.label)
  })
})

describe('in training', () => {
  const trainee = async () => t.as(await t.makeUser({ name: 'Tia Trainee', printedName: 'Tia Trainee', credentials: 'MD', inTraining: 1, passwordHash: null, roles: [{ siteId: room.site.id, role: 'neurologist' }] }))
  it.each([['report.write', true], ['report.sign', false], ['report.correct', false], ['study.return', true]] as const)('%s: %s', (action, may) => {
    expect(roleMay('neurologist', action, true)).toBe(may)
    expect(roleMay('neurologist', action)).toBe(true)
  })
  it('drafts and does not sign; the supervisor who goes over it signs, and both are named for ever', async () => {
    const by = await trainee()
    const studyId = await room.handedOver()
    await saveDraft(by, { studyId, draft: finishedDraft({ correlation: 'Written in training.' }), revision: 0 })
    const looked = await viewReading(by, studyId)
    await expect(signReport(by, { studyId, password: PASSWORD, meaning, draftRevision: looked.draftRevision, fingerprint: looked.fingerprint })).rejects.toMatchObject({ code: 'not-allowed' })
    await takeStudy(room.reader, studyId)
    await saveDraft(room.reader, { studyId, draft: finishedDraft({ correlation: 'Gone over by the supervisor.' }), revision: looked.draftRevision })
    const { reportId } = await signReport(room.reader, await room.lookedAt(studyId))
    const version = await t.db.selectFrom('reportVersion').selectAll().where('reportId', '=', reportId).executeTakeFirstOrThrow()
    expect(JSON.parse(version.snapshotJson)).toMatchObject({ draftedBy: 'Tia Trainee, MD, in training', signature: { name: 'Rea Sample' } })
  })
})
