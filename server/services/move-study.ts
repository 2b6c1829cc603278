import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { RunSettings } from '#server/database/queries/studies'
import type { Study } from '#server/database/tables/study'
import { DomainError } from '#shared/errors'
import type { StudyState } from '#shared/states'
import { mayAt, now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { aboutStudy, studyChanged } from './editable-study'
import { insertStudy } from './start-study'
import { isEmptyRun } from './lay-out-runs'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'

const beforeReading: readonly StudyState[] = ['planned', 'recording', 'returned', 'handed-over', 'stopped']

async function studyIn(trx: Trx, id: string): Promise<Study> {
  const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  return study
}

/** Back to booked when the room is still free at that time, else to be booked again. */
async function bookingStands(trx: Trx, referralId: string, reason: string): Promise<boolean> {
  const booking = await trx.selectFrom('booking').select('id').where('referralId', '=', referralId).where('state', '=', 'attended').orderBy('startsAt', 'desc').executeTakeFirst()
  if (!booking) return false
  try {
    await trx.updateTable('booking').set({ state: 'booked', arrivedAt: null }).where('id', '=', booking.id).execute()
    return true
  }
  catch (error) {
    if (!(error instanceof Error && error.message.includes('booking-overlap'))) throw error
    await trx.updateTable('booking').set({ state: 'cancelled', reason }).where('id', '=', booking.id).execute()
    return false
  }
}

/** The patient of the referral has not been examined: it waits for its day again, and somebody looks after it. */
async function reopenReferral(context: ServiceContext, trx: Trx, study: Study, reason: string): Promise<void> {
  const referral = await trx.selectFrom('referral').selectAll().where('id', '=', study.referralId).executeTakeFirstOrThrow()
  if (referral.state !== 'attended') return
  const to = await bookingStands(trx, referral.id, reason) ? 'booked' : 'accepted'
  await moveState(context, trx, { subject: 'referral', id: referral.id, from: 'attended', to, reason })
  await recordAuditEvent(context, trx, { name: 'referral.reopened', subject: 'referral', subjectId: referral.id, siteId: referral.siteId, patientId: referral.patientId, data: { to } })
  await createTask(context, trx, { kind: 'study-in-error', subject: 'referral', subjectId: referral.id, siteId: referral.siteId, ownerRole: 'administrator', sentence: `${study.number} was entered in error. See whether the appointment of ${referral.number} still stands.` })
}

/**
 * A study that should not exist. Nothing is removed: it reads "entered in error" with its reason, and its referral waits
 * again. One that is signed is withdrawn through its report.
 * @throws DomainError 'wrong-state'
 */
export async function enterStudyInError(context: ServiceContext, { id, reason }: { id: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyIn(trx, id)
    if (study.state === 'read') throw new DomainError('wrong-state', { message: 'This study is signed. Withdraw its report as entered in error; the study follows.' })
    await moveState(context, trx, { subject: 'study', id, from: beforeReading, to: 'entered-in-error', reason })
    await reopenReferral(context, trx, study, reason)
    await recordAuditEvent(context, trx, { name: 'study.entered-in-error', ...aboutStudy(study), data: {} })
  })
}

/** The referral of the person who was really examined: here and waiting, or booked. */
async function rightReferral(context: ServiceContext, trx: Trx, study: Study, id: string) {
  const referral = await trx.selectFrom('referral').innerJoin('site', 'site.id', 'referral.siteId').selectAll('referral').select('site.timeZone').where('referral.id', '=', id).executeTakeFirst()
  if (!referral || !mayAt(context.actor, 'study.record', referral.siteId)) throw new DomainError('not-valid', { fields: [{ path: 'toReferralId', message: 'Choose the referral of the right patient.' }] })
  if (referral.patientId === study.patientId) throw new DomainError('not-valid', { fields: [{ path: 'toReferralId', message: 'This referral belongs to the same patient.' }] })
  if (referral.siteId !== study.siteId) throw new DomainError('not-valid', { fields: [{ path: 'toReferralId', message: 'The referral is booked at another site. Book it here first.' }] })
  return referral
}

type Ids = Map<string, string>
const idFor = (ids: Ids, old: string): string => ids.get(old) ?? ids.set(old, randomUUID()).get(old)!

async function copyTemperatures(trx: Trx, from: string, to: string, ids: Ids): Promise<void> {
  const readings = await trx.selectFrom('studyTemperature').selectAll().where('studyId', '=', from).where('removedAt', 'is', null).execute()
  for (const reading of readings) await trx.insertInto('studyTemperature').values({ ...reading, id: idFor(ids, reading.id), studyId: to }).execute()
}

/** Direction, quality, time of recording go along; what names another run or reading names its copy. */
function settingsCopy(settingsJson: string, ids: Ids): string {
  const settings = JSON.parse(settingsJson) as RunSettings
  const { temperatureId, repeats, ...rest } = settings
  return JSON.stringify({ ...rest, ...(temperatureId ? { temperatureId: idFor(ids, temperatureId) } : {}), ...(repeats ? { repeats: idFor(ids, repeats) } : {}) })
}

/** Every value as it was typed, with who typed it and when. Questions that were kept with a reason are asked again. */
async function copyRun(trx: Trx, run: { id: string }, to: string, ids: Ids): Promise<void> {
  const rows = await trx.selectFrom('studyRow').selectAll().where('runId', '=', run.id).where('removedAt', 'is', null).execute()
  for (const row of rows) {
    const rowId = randomUUID()
    await trx.insertInto('studyRow').values({ ...row, id: rowId, runId: idFor(ids, run.id) }).execute()
    const cells = await trx.selectFrom('studyCell').selectAll().where('rowId', '=', row.id).where('entryJson', '<>', 'null').execute()
    for (const cell of cells) await trx.insertInto('studyCell').values({ ...cell, rowId, studyId: to, revision: 1 }).execute()
  }
}

async function copyRuns(context: ServiceContext, trx: Trx, from: string, to: string): Promise<number> {
  const ids: Ids = new Map()
  await copyTemperatures(trx, from, to, ids)
  const runs = await trx.selectFrom('studyRun').selectAll().where('studyId', '=', from).where('removedAt', 'is', null).orderBy('position').execute()
  let copied = 0
  for (const run of runs) {
    if (await isEmptyRun(trx, run.id)) continue
    await trx.insertInto('studyRun').values({ ...run, id: idFor(ids, run.id), studyId: to, settingsJson: settingsCopy(run.settingsJson, ids), createdAt: now(context), revision: 1 }).execute()
    await copyRun(trx, run, to, ids)
    copied += 1
  }
  return copied
}

/** Without its days a temperature of one visit would serve the runs of another. Who was confirmed then was the other person. */
async function copyVisits(trx: Trx, from: string, to: string): Promise<void> {
  const visits = await trx.selectFrom('studyVisit').selectAll().where('studyId', '=', from).execute()
  for (const visit of visits) await trx.insertInto('studyVisit').values({ ...visit, id: randomUUID(), studyId: to, confirmationJson: 'null' }).execute()
}

/** Blank runs that the right protocol laid out where values were moved to would stand twice. */
async function dropBlankTwins(context: ServiceContext, trx: Trx, studyId: string): Promise<void> {
  const runs = await trx.selectFrom('studyRun').selectAll().where('studyId', '=', studyId).where('removedAt', 'is', null).execute()
  const filled: typeof runs = []
  for (const run of runs) if (!await isEmptyRun(trx, run.id)) filled.push(run)
  for (const run of runs.filter(one => !filled.includes(one))) {
    const twin = filled.find(one => one.technique === run.technique && one.side === run.side)
    if (!twin) continue
    await trx.updateTable('studyRun').set({ removedAt: now(context) }).where('id', '=', run.id).execute()
    if (run.planned === 1) await trx.updateTable('studyRun').set({ planned: 1 }).where('id', '=', twin.id).execute()
  }
}

/**
 * A study that was begun under the wrong patient: entered in error there, and a new study in the right record with the
 * values moved, both linked. Height, weight, identity and side are of the other person and are entered anew; the values
 * are judged by the right age and are looked at again before the hand-over.
 * @returns the study in the right record
 * @throws DomainError 'not-valid' when the referral is not one of another patient here, 'wrong-state'
 */
export async function moveStudy(context: ServiceContext, move: { id: string, toReferralId: string, reason: string }): Promise<{ studyId: string }> {
  return context.db.transaction().execute(trx => moveStudyIn(context, trx, move))
}

/** `moveStudy` as a part of something larger: the withdrawal of its report. */
export async function moveStudyIn(context: ServiceContext, trx: Trx, { id, toReferralId, reason }: { id: string, toReferralId: string, reason: string }): Promise<{ studyId: string }> {
  const byUserId = context.actor.userId
  if (!byUserId) throw new DomainError('not-signed-in')
  const study = await studyIn(trx, id)
  if (study.state === 'read') throw new DomainError('wrong-state', { message: 'This study is signed. Withdraw its report as entered in error first; then move the values.' })
  if (await trx.selectFrom('studyMove').select('at').where('fromStudyId', '=', id).executeTakeFirst()) throw new DomainError('wrong-state', { message: 'The values were moved before.' })
  const referral = await rightReferral(context, trx, study, toReferralId)
  if (study.state !== 'entered-in-error') await moveState(context, trx, { subject: 'study', id, from: beforeReading, to: 'entered-in-error', reason })
  await reopenReferral(context, trx, study, reason)
  const target = await insertStudy(context, trx, referral, { studyDate: study.studyDate, startedAt: study.startedAt, technologistId: study.technologistId })
  const runs = await copyRuns(context, trx, id, target.id)
  await dropBlankTwins(context, trx, target.id)
  await trx.updateTable('upload').set({ studyId: target.id }).where('studyId', '=', id).where('removedAt', 'is', null).execute()
  const later = await trx.selectFrom('studyLaterEntry').selectAll().where('studyId', '=', id).executeTakeFirst()
  if (later) await trx.insertInto('studyLaterEntry').values({ ...later, studyId: target.id }).execute()
  await copyVisits(trx, id, target.id)
  await trx.insertInto('studyMove').values({ fromStudyId: id, toStudyId: target.id, reason, at: now(context), byUserId, checkedAt: null, checkedBy: null }).execute()
  await recordAuditEvent(context, trx, { name: 'study.moved-away', ...aboutStudy(study), data: { toStudyId: target.id } })
  await recordAuditEvent(context, trx, { name: 'study.moved-here', ...aboutStudy(target), data: { fromStudyId: id, runs } })
  return { studyId: target.id }
}

/** The values that came from another record were looked at again, against the person who was really measured. */
export async function checkMovedValues(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyIn(trx, id)
    if (study.state !== 'recording' && study.state !== 'returned') throw new DomainError('wrong-state', { details: { state: study.state } })
    const move = await trx.updateTable('studyMove').set({ checkedAt: now(context), checkedBy: context.actor.userId }).where('toStudyId', '=', id).where('checkedAt', 'is', null).returningAll().executeTakeFirst()
    if (!move) throw new DomainError('wrong-state')
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.moved-checked', ...aboutStudy(study), data: { fromStudyId: move.fromStudyId } })
  })
}
