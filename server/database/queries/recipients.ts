import { sql } from 'kysely'
import type { Database } from '../connection'

/** Someone a report goes to, with what decides whether it can be mailed. */
export interface Recipient {
  physicianId: string
  practiceId: string
  name: string
  practiceName: string
  town: string
  email: string
  /** As the practice chose: the PDF in the mail, or a link that opens with the passphrase. */
  deliveryMethod: 'encrypted-pdf' | 'collection-link'
  reachable: boolean
  /** Why it cannot be mailed; '' when it can. */
  because: string
}

async function recipientsById(db: Database, ids: string[], today: string): Promise<Recipient[]> {
  const rows = await db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId')
    .select(['physician.id as physicianId', 'practiceId', 'physician.name', 'practice.name as practiceName', 'practice.town', 'email', 'deliveryMethod', 'emailVerifiedAt', 'passphraseSealed', 'passphraseHandedOverAt'])
    .select(sql<number>`practice.closed_at IS NOT NULL OR coalesce(physician.left_on <= ${today}, 0)`.as('left'))
    .where('physician.id', 'in', ids).orderBy('physician.name').orderBy('physician.id').execute()
  return rows.map(({ emailVerifiedAt, passphraseSealed, passphraseHandedOverAt, left, ...row }) => {
    const because = left ? 'the physician left the practice' : emailVerifiedAt === null ? 'the address is not verified' : passphraseSealed === null ? 'the practice has no passphrase yet' : passphraseHandedOverAt === null ? 'the practice was not given its passphrase yet' : ''
    return { ...row, because, reachable: because === '' }
  })
}

/** Those the referral names: the referring physician and the copies. */
export async function recipientsOfReferral(db: Database, referralId: string, today: string): Promise<Recipient[]> {
  const named = await db.selectFrom('physician').select(eb => eb.fn.coalesce('mergedInto', 'id').as('id')).where(eb => eb.or([
    eb('id', 'in', eb.selectFrom('referral').select('physicianId').where('referral.id', '=', referralId).$castTo<{ physicianId: string }>()),
    eb('id', 'in', eb.selectFrom('referralCopy').select('referralCopy.physicianId').where('referralId', '=', referralId)),
  ])).execute()
  return await recipientsById(db, [...new Set(named.map(physician => physician.id))], today)
}

/**
 * Those a later version goes to: everyone the referral names now and everyone who had an earlier version. A delivery
 * that was withdrawn does not count: a report sent to the wrong practice is not corrected there. Whoever's entry was
 * merged with another gets it under the one that stays.
 */
export async function recipientsOfVersion(db: Database, { referralId, reportId }: { referralId: string, reportId: string }, today: string): Promise<Recipient[]> {
  const named = await recipientsOfReferral(db, referralId, today)
  const had = await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId')
    .innerJoin('physician', 'physician.id', 'delivery.physicianId').select(eb => eb.fn.coalesce('physician.mergedInto', 'physician.id').as('physicianId')).distinct().where('reportVersion.reportId', '=', reportId).where('delivery.state', '<>', 'withdrawn').execute()
  const others = [...new Set(had.map(row => row.physicianId))].filter(id => !named.some(person => person.physicianId === id))
  return [...named, ...await recipientsById(db, others, today)]
}

/** One person of the directory as a recipient. */
export async function recipientById(db: Database, physicianId: string, today: string): Promise<Recipient | undefined> {
  const [found] = await recipientsById(db, [physicianId], today)
  return found
}
