import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { Patient } from '#server/database/tables/patient'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { withdrawReady } from './withdraw-ready'

interface Moved { referrals: string[], studies: string[], outsideStudies: string[] }

async function openRecord(trx: Trx, id: string): Promise<Patient> {
  const row = await trx.selectFrom('patient').selectAll().where('id', '=', id).executeTakeFirst()
  if (!row) throw new DomainError('not-found')
  if (row.mergedInto) throw new DomainError('wrong-state', { message: 'This record was put together with another one already.' })
  return row
}

/** What limits depend on must be the same, or a merge would silently change how a study is judged. */
function checkSamePerson(kept: Patient, merged: Patient): void {
  if (kept.birthDate !== merged.birthDate) throw new DomainError('not-valid', { fields: [{ path: 'mergedId', message: 'The dates of birth differ. Correct the wrong one first: age decides the limits.' }] })
  if (kept.sexForLimits && merged.sexForLimits && kept.sexForLimits !== merged.sexForLimits) throw new DomainError('not-valid', { fields: [{ path: 'mergedId', message: 'The sex for limits differs. Correct the wrong one first.' }] })
}

/**
 * Puts two records of one person together: referrals and studies go to the record that is kept, the other one points to
 * it. Signed reports keep the identity they were signed with. It can be undone at any time.
 * @throws DomainError 'not-valid' when birth date or sex for limits differ, 'wrong-state' when one is merged already
 */
export async function mergePatients(context: ServiceContext, { keptId, mergedId, reason }: { keptId: string, mergedId: string, reason: string }): Promise<{ mergeId: string }> {
  return await context.db.transaction().execute(trx => mergePatientsIn(context, trx, { keptId, mergedId, reason }))
}

/** `mergePatients` as a part of something larger. */
export async function mergePatientsIn(context: ServiceContext, trx: Trx, { keptId, mergedId, reason }: { keptId: string, mergedId: string, reason: string }): Promise<{ mergeId: string }> {
  const mergedBy = context.actor.userId
  if (!mergedBy) throw new DomainError('not-signed-in')
  if (keptId === mergedId) throw new DomainError('not-valid', { fields: [{ path: 'mergedId', message: 'Choose another record than this one.' }] })
  const [kept, merged] = [await openRecord(trx, keptId), await openRecord(trx, mergedId)]
  checkSamePerson(kept, merged)
  const moved = await moveAll(trx, mergedId, keptId)
  const mergeId = randomUUID()
  await trx.insertInto('patientMerge').values({ id: mergeId, keptId, mergedId, movedJson: JSON.stringify(moved), reason, mergedAt: now(context), mergedBy, undoneAt: null, undoneBy: null }).execute()
  await trx.updateTable('patient').set({ mergedInto: keptId, revision: merged.revision + 1 }).where('id', '=', mergedId).execute()
  const data = { keptNumber: kept.recordNumber, mergedNumber: merged.recordNumber, referrals: moved.referrals.length, studies: moved.studies.length }
  for (const patientId of [keptId, mergedId]) await recordAuditEvent(context, trx, { name: 'patient.merged', subject: 'patient', subjectId: patientId, patientId, data })
  // Whoever puts two records together has said who the patient of a referral from the desk is.
  await trx.updateTable('deskReferral').set({ identifiedAt: now(context), identifiedBy: mergedBy, outcome: 'known', mergeId }).where('patientId', 'in', [keptId, mergedId]).where('identifiedAt', 'is', null).execute()
  await withdrawReady(context, trx, { patientId: keptId })
  return { mergeId }
}

async function moveAll(trx: Trx, from: string, to: string): Promise<Moved> {
  const referrals = await trx.updateTable('referral').set({ patientId: to }).where('patientId', '=', from).returning('id').execute()
  const studies = await trx.updateTable('study').set({ patientId: to }).where('patientId', '=', from).returning('id').execute()
  const outsideStudies = await trx.updateTable('outsideStudy').set({ patientId: to }).where('patientId', '=', from).returning('id').execute()
  return { referrals: referrals.map(row => row.id), studies: studies.map(row => row.id), outsideStudies: outsideStudies.map(row => row.id) }
}

/**
 * Takes two records apart again: what the merge moved goes back, and a study goes with its referral; what came since stays
 * with the record that was kept.
 * @throws DomainError 'not-found', 'wrong-state' when it was undone already, or the kept record was itself merged since
 */
export async function undoMerge(context: ServiceContext, { mergeId, reason }: { mergeId: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const merge = await trx.selectFrom('patientMerge').selectAll().where('id', '=', mergeId).executeTakeFirst()
    if (!merge) throw new DomainError('not-found')
    if (merge.undoneAt) throw new DomainError('wrong-state')
    const { keptId, mergedId } = merge
    const moved = JSON.parse(merge.movedJson) as Moved
    const kept = await trx.selectFrom('patient').select('mergedInto').where('id', '=', keptId).executeTakeFirstOrThrow()
    // What was moved lies further on by now: it would stay there, in another person's record.
    if (kept.mergedInto) throw new DomainError('wrong-state', { message: 'The record that was kept was put together with another one since. Take those two apart first.' })
    await withdrawReady(context, trx, { patientId: keptId })
    for (const id of moved.referrals) await trx.updateTable('referral').set({ patientId: mergedId }).where('id', '=', id).where('patientId', '=', keptId).execute()
    for (const id of moved.studies) await trx.updateTable('study').set({ patientId: mergedId }).where('id', '=', id).where('patientId', '=', keptId).execute()
    // One that was begun since, for a referral that goes back.
    for (const id of moved.referrals) await trx.updateTable('study').set({ patientId: mergedId }).where('referralId', '=', id).where('patientId', '=', keptId).execute()
    for (const id of moved.outsideStudies) await trx.updateTable('outsideStudy').set({ patientId: mergedId }).where('id', '=', id).where('patientId', '=', keptId).execute()
    await trx.updateTable('patient').set(eb => ({ mergedInto: null, revision: eb('revision', '+', 1) })).where('id', '=', mergedId).execute()
    await trx.updateTable('deskReferral').set({ identifiedAt: null, identifiedBy: null, outcome: null, mergeId: null }).where('mergeId', '=', mergeId).execute()
    await trx.updateTable('patientMerge').set({ undoneAt: now(context), undoneBy: context.actor.userId, undoReason: reason }).where('id', '=', mergeId).execute()
    const numbers = await trx.selectFrom('patient').select(['id', 'recordNumber']).where('id', 'in', [keptId, mergedId]).execute()
    const numberOf = (id: string) => numbers.find(row => row.id === id)?.recordNumber ?? ''
    for (const patientId of [keptId, mergedId]) await recordAuditEvent(context, trx, { name: 'patient.merge-undone', subject: 'patient', subjectId: patientId, patientId, data: { keptNumber: numberOf(keptId), mergedNumber: numberOf(mergedId) } })
  })
}
