import { beforeAll, describe, expect, it } from 'vitest'
import { renderMail } from '#server/email/templates/index'
import { addAbsence } from '#server/services/keep-absence'
import { raiseOverdue } from '#server/services/raise-overdue'
import { takeStudy } from '#server/services/take-study'
import { readingRoom } from './reading-helpers'
import { testContext } from './helpers'

const t = await testContext()
const room = await readingRoom(t)
const system = t.context
const tasks = (subjectId: string) => t.db.selectFrom('task').leftJoin('user', 'user.id', 'task.ownerId').select(['kind', 'user.name as owner', 'doneAt', 'sentence', 'dueAt']).where('subjectId', '=', subjectId).orderBy('task.createdAt').orderBy('kind').execute()
const mails = () => t.db.selectFrom('outboxMail').selectAll().where('template', '=', 'overdue').execute()
const round = async (at: string) => {
  t.clock.set(at)
  return await raiseOverdue(system)
}

describe('an unsigned study', () => {
  let studyId = ''
  beforeAll(async () => {
    t.clock.set('2026-12-02T09:00:00.000Z')
    studyId = await room.handedOver({ urgency: 'urgent', urgencyReason: 'falls' })
    await takeStudy(room.reader, studyId)
  })

  it('is nobody\'s task before its clock ran out', async () => {
    expect(await round('2026-12-03T08:59:00.000Z')).toBe(0)
    expect(await tasks(studyId)).toEqual([])
  })
  it('becomes the task of the reader who took it, told once by a mail without a patient', async () => {
    expect(await round('2026-12-03T09:01:00.000Z')).toBe(1)
    expect(await round('2026-12-03T09:06:00.000Z')).toBe(0)
    expect(await tasks(studyId)).toMatchObject([{ kind: 'study-unsigned', owner: 'Rea Sample', doneAt: null, dueAt: '2026-12-03T09:00:00.000Z' }])
    const sent = await mails()
    expect(sent).toHaveLength(1)
    const words = renderMail('overdue', JSON.parse(t.keys.unseal(sent[0]!.dataSealed)), 'http://127.0.0.1:3000')
    expect(words.subject).toBe('Something waits for you in Orthodrome')
    const patient = await t.db.selectFrom('patient').innerJoin('study', 'study.patientId', 'patient.id').select(['familyName', 'recordNumber', 'birthDate']).where('study.id', '=', studyId).executeTakeFirstOrThrow()
    for (const secret of Object.values(patient)) expect(words.text + words.html + words.subject).not.toContain(secret)
    expect(await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', studyId).where('name', '=', 'clock.passed').execute()).toHaveLength(1)
  })
  it('goes to the medical director when it stays overdue', async () => {
    const director = await t.db.selectFrom('roleHolding').innerJoin('user', 'user.id', 'roleHolding.userId').select('user.name').where('role', '=', 'medical-director').executeTakeFirstOrThrow()
    await round('2026-12-05T08:59:00.000Z')
    expect(await tasks(studyId)).toHaveLength(1)
    expect(await round('2026-12-05T09:01:00.000Z')).toBe(1)
    expect(await tasks(studyId)).toMatchObject([{ kind: 'study-unsigned' }, { kind: 'study-unsigned-escalated', owner: director.name }])
  })
  it('closes its tasks once it waits no longer', async () => {
    await t.db.updateTable('study').set({ state: 'read' }).where('id', '=', studyId).execute()
    await round('2026-12-05T10:00:00.000Z')
    expect((await tasks(studyId)).every(task => task.doneAt !== null)).toBe(true)
  })
})

it('goes to the one who covers while the reader is away', async () => {
  const other = await testContext()
  const there = await readingRoom(other)
  const studyId = await there.handedOver()
  await takeStudy(there.reader, studyId)
  await addAbsence(there.reader, there.reader.actor.userId!, { fromDay: '2026-12-03', toDay: '2026-12-20', coveredBy: there.other.actor.userId! })
  other.clock.set('2026-12-04T09:01:00.000Z')
  await raiseOverdue(other.context)
  const [task] = await other.db.selectFrom('task').innerJoin('user', 'user.id', 'task.ownerId').select(['kind', 'user.name as owner']).where('subjectId', '=', studyId).execute()
  expect(task).toEqual({ kind: 'study-unsigned', owner: 'Otto Sample' })
})

it('a referral is answered, then booked, by an administrator of its site', async () => {
  t.clock.set('2026-12-10T09:00:00.000Z')
  await t.makeUser({ name: 'Ada Sample', roles: [{ siteId: room.site.id, role: 'administrator' }] })
  const referral = await t.makeReferral({ siteId: room.site.id, receivedAt: '2026-12-10T09:00:00.000Z', stateSince: '2026-12-10T09:00:00.000Z', urgency: 'same-week', side: 'right', symptoms: 'tingling', onset: '2026-11', weakness: 'no', sensorySymptoms: 'yes', pain: 'no', examination: 'power full', provisionalDiagnosis: 'median neuropathy', consentElectronic: 'yes' })
  await round('2026-12-10T13:01:00.000Z')
  const [task] = await tasks(referral.id)
  expect(task).toMatchObject({ kind: 'referral-unanswered', doneAt: null })
  expect(task!.owner).toBeTruthy()
  expect(task!.sentence).toContain(referral.number)
  await t.db.updateTable('referral').set({ state: 'accepted', stateSince: '2026-12-10T14:00:00.000Z' }).where('id', '=', referral.id).execute()
  await round('2026-12-15T09:01:00.000Z')
  expect(await tasks(referral.id)).toMatchObject([{ kind: 'referral-unanswered', doneAt: expect.any(String) }, { kind: 'referral-unbooked', doneAt: null }])
})

it('a task closed by hand does not come back for the same wait', async () => {
  const open = await t.db.selectFrom('task').select(['id', 'subjectId']).where('kind', '=', 'referral-unbooked').executeTakeFirstOrThrow()
  await t.db.updateTable('task').set({ doneAt: '2026-12-15T10:00:00.000Z' }).where('id', '=', open.id).execute()
  await round('2026-12-15T11:00:00.000Z')
  expect((await tasks(open.subjectId)).filter(task => task.doneAt === null)).toEqual([])
})
