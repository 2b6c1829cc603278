import { sql } from 'kysely'
import type { PatientView } from '#shared/schemas/patient'
import type { ReferralState, StudyState } from '#shared/states'
import type { Database } from '../connection'
import { searchPatients } from './patients'

export interface SearchHits {
  patients: PatientView[]
  referrals: { id: string, number: string, patientName: string, state: ReferralState, siteName: string, question: string }[]
  studies: { id: string, number: string, patientName: string, state: StudyState, siteName: string, studyDate: string }[]
}
/** Sites where the person may see each kind of thing. */
export interface SearchSites { referrals: readonly string[], studies: readonly string[] }

const MOST = 8
const nameOf = (row: { familyName: string, givenName: string }) => `${row.familyName}, ${row.givenName}`

/** The search of the bar: people by words, referrals and studies of those people or by the beginning of their number. */
export async function searchAll(db: Database, words: string, sites: SearchSites): Promise<SearchHits> {
  const number = words.trim().toUpperCase()
  const isNumber = /^(REF|NCS)-/.test(number)
  const patients = isNumber ? [] : (await searchPatients(db, { search: words, page: 1, pageSize: MOST })).rows
  const asked = { number: isNumber ? number : '', patientIds: patients.map(patient => patient.id) }
  return { patients, referrals: await referralHits(db, asked, sites.referrals), studies: await studyHits(db, asked, sites.studies) }
}

interface Asked { number: string, patientIds: string[] }

/** The plus keeps SQLite from reading whole sites where a few people's records are asked for. */
async function referralHits(db: Database, { number, patientIds }: Asked, siteIds: readonly string[]): Promise<SearchHits['referrals']> {
  const rows = await db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').innerJoin('site', 'site.id', 'referral.siteId')
    .select(['referral.id', 'referral.number', 'familyName', 'givenName', 'referral.state', 'site.name as siteName', 'clinicalQuestion as question'])
    .where(sql<string>`+referral.site_id`, 'in', siteIds)
    .where(eb => number ? eb.and([eb('referral.number', '>=', number), eb('referral.number', '<', `${number}\uFFFF`)]) : eb('referral.patientId', 'in', patientIds))
    .orderBy('referral.createdAt', 'desc').limit(MOST).execute()
  return rows.map(({ familyName, givenName, ...row }) => ({ ...row, patientName: nameOf({ familyName, givenName }) }))
}

async function studyHits(db: Database, { number, patientIds }: Asked, siteIds: readonly string[]): Promise<SearchHits['studies']> {
  const rows = await db.selectFrom('study').innerJoin('patient', 'patient.id', 'study.patientId').innerJoin('site', 'site.id', 'study.siteId')
    .select(['study.id', 'study.number', 'familyName', 'givenName', 'study.state', 'site.name as siteName', 'studyDate'])
    .where(sql<string>`+study.site_id`, 'in', siteIds)
    .where(eb => number ? eb.and([eb('study.number', '>=', number), eb('study.number', '<', `${number}\uFFFF`)]) : eb('study.patientId', 'in', patientIds))
    .orderBy('study.createdAt', 'desc').limit(MOST).execute()
  return rows.map(({ familyName, givenName, ...row }) => ({ ...row, patientName: nameOf({ familyName, givenName }) }))
}
