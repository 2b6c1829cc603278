import { sql } from 'kysely'
import type { DeskOrigin } from '#shared/schemas/referral'
import type { Database, Trx } from '../connection'
import { namesakesOf } from './patients'

/** True while nobody of the clinic has said who the patient of a referral from the desk is. For a list of referrals. */
export const toIdentify = sql<number>`EXISTS (SELECT 1 FROM desk_referral WHERE desk_referral.referral_id = referral.id AND desk_referral.identified_at IS NULL)`

export async function isToIdentify(db: Database | Trx, referralId: string): Promise<boolean> {
  return await db.selectFrom('deskReferral').select('referralId').where('referralId', '=', referralId).where('identifiedAt', 'is', null).executeTakeFirst() !== undefined
}

/** Who sent it from the desk, and who may be the same person as long as that is open; null when it did not come from there. */
export async function deskOriginOf(db: Database, referralId: string): Promise<DeskOrigin | null> {
  const row = await db.selectFrom('deskReferral').innerJoin('user as sender', 'sender.id', 'deskReferral.sentBy').leftJoin('user as clinic', 'clinic.id', 'deskReferral.identifiedBy').innerJoin('patient', 'patient.id', 'deskReferral.patientId')
    .select(['sender.name as sentBy', 'sentAt', 'identifiedAt', 'clinic.name as identifiedBy', 'outcome', 'patient.id as patientId', 'familyName', 'givenName', 'birthDate']).where('deskReferral.referralId', '=', referralId).executeTakeFirst()
  if (!row) return null
  const { patientId, familyName, givenName, birthDate, ...origin } = row
  return { ...origin, candidates: origin.identifiedAt ? [] : await namesakesOf(db, { familyName, givenName, birthDate, exceptId: patientId }) }
}
