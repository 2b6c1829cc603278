import { namesakesOf } from '#server/database/queries/patients'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { mergePatientsIn } from './merge-patients'
import { recordAuditEvent } from './record-audit-event'

/**
 * Says who the patient of a referral from the desk is: the same person as a record of the register, which is then put
 * together with the one that the desk made and can be taken apart again; or somebody new. A referring physician is never
 * told which. Where a record is likely the same person, "new" needs its reason.
 * @throws DomainError 'wrong-state' when it was said already · 'not-valid' as `mergePatients`, and without a reason
 */
export async function identifyPatient(context: ServiceContext, { referralId, knownId, reason }: { referralId: string, knownId: string | null, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const row = await trx.selectFrom('deskReferral').innerJoin('referral', 'referral.id', 'deskReferral.referralId').selectAll('deskReferral').select('siteId').where('referralId', '=', referralId).executeTakeFirst()
    if (!row) throw new DomainError('not-found')
    if (row.identifiedAt) throw new DomainError('wrong-state', { message: 'Who the patient is was said already.' })
    if (reason.length < 3 && (knownId !== null || await likelyKnown(trx, row.patientId))) throw new DomainError('not-valid', { fields: [{ path: 'reason', message: knownId ? 'Say how you know that it is one person.' : 'Say how you know that it is another person.' }] })
    if (knownId) await mergePatientsIn(context, trx, { keptId: knownId, mergedId: row.patientId, reason })
    else await trx.updateTable('deskReferral').set({ identifiedAt: now(context), identifiedBy: context.actor.userId, outcome: 'new' }).where('referralId', '=', referralId).execute()
    await recordAuditEvent(context, trx, { name: 'referral.patient-identified', subject: 'referral', subjectId: referralId, siteId: row.siteId, patientId: knownId ?? row.patientId, data: { outcome: knownId ? 'known' : 'new' } })
  })
}

async function likelyKnown(trx: Trx, patientId: string): Promise<boolean> {
  const patient = await trx.selectFrom('patient').select(['familyName', 'givenName', 'birthDate']).where('id', '=', patientId).executeTakeFirstOrThrow()
  return (await namesakesOf(trx, { ...patient, exceptId: patientId })).some(namesake => namesake.strength === 'likely-same')
}
