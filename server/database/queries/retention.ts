import { sql, type RawBuilder } from 'kysely'
import type { RetentionPolicy } from '#shared/policies/retention'
import type { Database } from '../connection'

const years = (day: RawBuilder<string>, count: number) => sql<string>`date(${day}, ${`+${count} years`})`

/**
 * Each patient with the day of the last contact and the first day after the years of the policy. Whoever was under 18 at
 * the last contact is kept until the later of two days. Merged entries are counted with the one that stays.
 */
function kept(db: Database, policy: RetentionPolicy) {
  const lastContact = sql<string>`max(substr(patient.created_at, 1, 10),
    coalesce((SELECT max(substr(state_since, 1, 10)) FROM referral WHERE referral.patient_id = patient.id), ''),
    coalesce((SELECT max(study_date) FROM study WHERE study.patient_id = patient.id), ''),
    coalesce((SELECT max(substr(signed_at, 1, 10)) FROM report_version JOIN report ON report.id = report_version.report_id JOIN study ON study.id = report.study_id WHERE study.patient_id = patient.id), ''))`
  const last = db.selectFrom('patient').where('mergedInto', 'is', null)
    .select(['patient.id as patientId', 'recordNumber', 'birthDate', lastContact.as('lastContact')])
    .select(sql<number>`EXISTS (SELECT 1 FROM referral WHERE referral.patient_id = patient.id AND state NOT IN ('answered','declined','cancelled','entered-in-error'))`.as('underWay'))
  const contact = sql<string>`last_contact`
  const child = sql<number>`last_contact < date(birth_date, '+18 years')`
  return db.with('contact', () => last).selectFrom('contact').select(['patientId', 'recordNumber', 'birthDate', 'lastContact', 'underWay', child.as('child')])
    .select(sql<string>`CASE WHEN ${child} THEN max(${years(contact, policy.childYears)}, ${years(sql<string>`birth_date`, policy.childUntilAge)}) ELSE ${years(contact, policy.adultYears)} END`.as('dueOn'))
}

export interface RetentionWish { show: 'past' | 'held', page: number, pageSize: number, today: string, policy: RetentionPolicy }

/** Records past their years without anything under way, the oldest first; or those on hold. */
export async function retentionPage(db: Database, { show, page, pageSize, today, policy }: RetentionWish) {
  const all = db.selectFrom(kept(db, policy).as('record')).leftJoin('legalHold', join => join.onRef('legalHold.patientId', '=', 'record.patientId').on('legalHold.liftedAt', 'is', null))
  const wanted = show === 'held' ? all.where('legalHold.id', 'is not', null) : all.where('dueOn', '<=', today).where('underWay', '=', 0)
  const { total } = await wanted.select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await wanted.leftJoin('user', 'user.id', 'legalHold.setBy')
    .select(['record.patientId', 'recordNumber', 'birthDate', 'lastContact', 'child', 'dueOn', 'legalHold.id as holdId', 'legalHold.reason', 'legalHold.setAt', 'user.name as setBy'])
    .orderBy('dueOn').orderBy('recordNumber').limit(pageSize).offset((page - 1) * pageSize).execute()
  return { total, rows }
}
