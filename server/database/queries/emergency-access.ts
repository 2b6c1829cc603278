import { sql } from 'kysely'
import type { EmergencyAccessRow, EmergencyHit } from '#shared/schemas/reading'
import type { Database, Trx } from '../connection'
import { searchPatients } from './patients'

export interface OpenAccess { id: string, reason: string, expiresAt: string, studyId: string }

/** The access that this person opened to a study and that did not run out yet. */
export async function openAccess(db: Database | Trx, { userId, studyId, at }: { userId: string, studyId: string, at: string }): Promise<OpenAccess | undefined> {
  return await db.selectFrom('emergencyAccess').select(['id', 'reason', 'expiresAt', 'studyId']).where('userId', '=', userId).where('studyId', '=', studyId).where('expiresAt', '>', at).executeTakeFirst()
}

/** The same for whatever of that study is asked for: itself, its referral, its report, a file of it. */
export async function openAccessTo(db: Database, { userId, siteId, ids, at }: { userId: string, siteId: string, ids: readonly string[], at: string }): Promise<OpenAccess | undefined> {
  if (ids.length === 0) return undefined
  return await db.selectFrom('emergencyAccess').innerJoin('study', 'study.id', 'emergencyAccess.studyId')
    .select(['emergencyAccess.id', 'reason', 'expiresAt', 'studyId'])
    .where('emergencyAccess.userId', '=', userId).where('emergencyAccess.siteId', '=', siteId).where('expiresAt', '>', at)
    .where(eb => eb.or([
      eb('study.id', 'in', ids), eb('study.referralId', 'in', ids),
      eb.exists(eb.selectFrom('report').select('report.id').whereRef('report.studyId', '=', 'study.id').where('report.id', 'in', ids)),
      eb.exists(eb.selectFrom('upload').select('upload.id').where('upload.id', 'in', ids).where(or => or.or([or('upload.studyId', '=', or.ref('study.id')), or('upload.referralId', '=', or.ref('study.referralId'))]))),
    ])).executeTakeFirst()
}

const lines = (db: Database) => db.selectFrom('study').innerJoin('patient', 'patient.id', 'study.patientId').innerJoin('site', 'site.id', 'study.siteId').innerJoin('referral', 'referral.id', 'study.referralId')
  .select(['study.id as studyId', 'study.number', 'familyName', 'givenName', 'birthDate', 'recordNumber', 'site.name as siteName', 'study.state', 'study.stateSince', 'urgency'])
const named = <R extends { familyName: string, givenName: string }>({ familyName, givenName, ...row }: R) => ({ ...row, patientName: `${familyName}, ${givenName}` })

/** What this person has open now. */
export async function accessesOf(db: Database, userId: string, at: string): Promise<EmergencyAccessRow[]> {
  const rows = await lines(db).innerJoin('emergencyAccess', 'emergencyAccess.studyId', 'study.id').select('expiresAt')
    .where('emergencyAccess.userId', '=', userId).where('expiresAt', '>', at).orderBy('expiresAt').execute()
  return rows.map(named)
}

/** Studies of other sites, by their number or by the person: identity and state only. */
export async function studiesElsewhere(db: Database, words: string, ownSites: readonly string[]): Promise<EmergencyHit[]> {
  const number = words.trim().toUpperCase()
  const isNumber = /^(REF|NCS)-/.test(number)
  const patients = isNumber ? [] : (await searchPatients(db, { search: words, page: 1, pageSize: 20 })).rows
  const rows = await lines(db).where('study.state', '<>', 'entered-in-error')
    .$if(ownSites.length > 0, query => query.where(sql<string>`+study.site_id`, 'not in', ownSites))
    .where(eb => isNumber ? eb.or([eb('study.number', '=', number), eb('referral.number', '=', number)]) : eb('study.patientId', 'in', patients.map(patient => patient.id)))
    .orderBy('study.createdAt', 'desc').limit(20).execute()
  return rows.map(named)
}
