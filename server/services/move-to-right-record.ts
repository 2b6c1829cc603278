import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { Study } from '#server/database/tables/study'
import type { Referral } from '#server/database/tables/referral'
import { DomainError } from '#shared/errors'
import { mayAt, now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { moveState, writeStateChange } from './move-state'
import { nextNumber } from './next-number'
import { recordAuditEvent } from './record-audit-event'

const waiting = ['accepted', 'booked', 'attended'] as const

/** @throws DomainError 'not-valid' with the field `rightReferralId` */
async function rightReferral(context: ServiceContext, trx: Trx, id: string, wrong: Study): Promise<Referral> {
  const refuse = (message: string) => new DomainError('not-valid', { fields: [{ path: 'rightReferralId', message }] })
  const referral = await trx.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirst()
  if (!referral || !mayAt(context.actor, 'report.correct', referral.siteId)) throw refuse('Choose a referral of a site where you sign.')
  if (referral.patientId === wrong.patientId) throw refuse('This referral is of the same person. Choose the one of the right person.')
  if (!waiting.some(state => state === referral.state)) throw refuse('This referral is not waiting for a study.')
  const other = await trx.selectFrom('study').select('id').where('referralId', '=', id).where('state', '<>', 'entered-in-error').executeTakeFirst()
  if (other) throw refuse('This referral has a study already.')
  return referral
}

/**
 * Puts the values of a study that was signed in the wrong record into the right one: a new study of the right referral,
 * handed over, to be read and signed there as a first version. Identity was not confirmed for that person, and says so.
 * @returns the new study
 * @throws DomainError 'not-valid'
 */
export async function moveToRightRecord(context: ServiceContext, trx: Trx, wrong: Study, referralId: string): Promise<Study> {
  const referral = await rightReferral(context, trx, referralId, wrong)
  const reason = `recorded under ${wrong.number}, which was entered in error`
  if (referral.state === 'accepted') await moveState(context, trx, { subject: 'referral', id: referralId, from: 'accepted', to: 'booked', reason })
  if (referral.state !== 'attended') await moveState(context, trx, { subject: 'referral', id: referralId, from: 'booked', to: 'attended', reason })
  await trx.updateTable('booking').set({ state: 'attended' }).where('referralId', '=', referralId).where('state', 'in', ['booked', 'arrived']).execute()
  const [id, at] = [randomUUID(), now(context)]
  const number = await nextNumber(trx, 'study', Number(wrong.studyDate.slice(0, 4)))
  const study = await trx.insertInto('study').values({
    ...wrong, id, number, referralId, patientId: referral.patientId, siteId: referral.siteId, state: 'handed-over', stateSince: at, stateReason: reason, createdAt: at,
    readerId: context.actor.userId, takenAt: at, confirmationJson: null, policyJson: null, returnQuestion: '', returnRunId: null, revision: 1,
    handOverNote: [wrong.handOverNote, `Recorded under ${wrong.number} and moved here by the reader; identity was not confirmed for this person.`].filter(Boolean).join(' '),
  }).returningAll().executeTakeFirstOrThrow()
  await writeStateChange(context, trx, { subject: 'study', id, from: null, to: 'handed-over', reason })
  await copyValues(context, trx, wrong.id, id)
  await recordAuditEvent(context, trx, { name: 'study.moved-to-right-record', ...aboutStudy(study), data: { number, from: wrong.id } })
  return study
}

/** Runs, rows, cells, temperatures and kept questions, with new ids: the wrong record keeps its own. */
async function copyValues(context: ServiceContext, trx: Trx, fromId: string, studyId: string): Promise<void> {
  const temperatures = new Map((await trx.selectFrom('studyTemperature').selectAll().where('studyId', '=', fromId).where('removedAt', 'is', null).execute()).map(row => [row.id, { ...row, id: randomUUID(), studyId }]))
  if (temperatures.size > 0) await trx.insertInto('studyTemperature').values([...temperatures.values()]).execute()
  const runs = await trx.selectFrom('studyRun').selectAll().where('studyId', '=', fromId).where('removedAt', 'is', null).orderBy('position').execute()
  const runIds = new Map(runs.map(run => [run.id, randomUUID()]))
  const renamed = (text: string) => [...runIds, ...[...temperatures].map(([old, row]) => [old, row.id] as const)].reduce((json, [old, fresh]) => json.replaceAll(old, fresh), text)
  for (const run of runs) {
    await trx.insertInto('studyRun').values({ ...run, id: runIds.get(run.id)!, studyId, settingsJson: renamed(run.settingsJson), createdBy: context.actor.userId }).execute()
    await copyRows(trx, run.id, runIds.get(run.id)!, studyId)
  }
}

async function copyRows(trx: Trx, fromRun: string, runId: string, studyId: string): Promise<void> {
  for (const row of await trx.selectFrom('studyRow').selectAll().where('runId', '=', fromRun).where('removedAt', 'is', null).execute()) {
    const id = randomUUID()
    await trx.insertInto('studyRow').values({ ...row, id, runId }).execute()
    const cells = await trx.selectFrom('studyCell').selectAll().where('rowId', '=', row.id).execute()
    if (cells.length > 0) await trx.insertInto('studyCell').values(cells.map(cell => ({ ...cell, rowId: id, studyId }))).execute()
  }
}
