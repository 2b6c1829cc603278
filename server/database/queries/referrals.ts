import { missingForBooking, type BookingView, type ReferralInput, type ReferralView, type ThreeAnswer, type UploadView } from '#shared/schemas/referral'
import type { Database } from '../connection'
import type { Referral } from '../tables/referral'
import { patientBand, routeOf } from './bands'
import { dueOf } from '#shared/referral-clocks'
import { deskOriginOf } from './desk-referrals'
import { physicianById } from './directory'
import { lettersOf } from './letters'
import { policyInForce } from './policies'
import { patientById } from './patients'

export async function siteOfReferral(db: Database, referralId: string): Promise<string | null> {
  const row = await db.selectFrom('referral').select('siteId').where('id', '=', referralId).executeTakeFirst()
  return row?.siteId ?? null
}

export async function referralRecord(db: Database, referralId: string): Promise<Referral | undefined> {
  return db.selectFrom('referral').selectAll().where('id', '=', referralId).executeTakeFirst()
}

export async function copiesOf(db: Database, referralId: string): Promise<string[]> {
  const rows = await db.selectFrom('referralCopy').select('physicianId').where('referralId', '=', referralId).orderBy('physicianId').execute()
  return rows.map(row => row.physicianId)
}

/** A row as the form knows it. */
export function referralInputOf(row: Referral, copyPhysicianIds: string[]): ReferralInput {
  const { patientId, siteId, physicianId, clinicalQuestion, side, bodySite, symptoms, onset, examination, provisionalDiagnosis, previousStudies, urgency, urgencyReason, needs, reportLanguage } = row
  const answer = (text: string) => text as ThreeAnswer
  return {
    patientId, siteId, physicianId, copyPhysicianIds, clinicalQuestion, side, bodySite, symptoms, onset, examination, provisionalDiagnosis, previousStudies, urgency, urgencyReason, needs, reportLanguage,
    weakness: answer(row.weakness), sensorySymptoms: answer(row.sensorySymptoms), pain: answer(row.pain), consentElectronic: answer(row.consentElectronic),
    cautions: JSON.parse(row.cautionsJson) as ReferralInput['cautions'],
  }
}

export async function uploadsOf(db: Database, referralId: string): Promise<UploadView[]> {
  return db.selectFrom('upload').leftJoin('user', 'user.id', 'upload.createdBy').select(['upload.id', 'originalName', 'mediaType', 'byteCount', 'upload.createdAt'])
    .select(eb => eb.fn.coalesce('user.name', eb.val('the referring practice')).as('createdBy'))
    .where('referralId', '=', referralId).where('removedAt', 'is', null).orderBy('upload.createdAt').execute()
}

/** The booking that counts: the latest that was not cancelled. */
export async function bookingOf(db: Database, referralId: string): Promise<BookingView | null> {
  const row = await db.selectFrom('booking').innerJoin('site', 'site.id', 'booking.siteId').leftJoin('user', 'user.id', 'booking.technologistId')
    .select(['booking.id', 'siteId', 'site.name as siteName', 'room', 'technologistId', 'user.name as technologistName', 'startsAt', 'endsAt', 'booking.state', 'reason'])
    .where('referralId', '=', referralId).where('booking.state', '<>', 'cancelled').orderBy('booking.createdAt', 'desc').orderBy('startsAt', 'desc').executeTakeFirst()
  return row ?? null
}

async function physicianOf(db: Database, id: string | null, today: string): Promise<ReferralView['physician']> {
  const found = id === null ? undefined : await physicianById(db, id, today)
  return found ? { id: found.id, name: found.name, practiceName: found.practiceName, town: found.town, emailVerified: found.emailVerified } : null
}

async function ownerOf(db: Database, id: string | null): Promise<ReferralView['owner']> {
  return id === null ? null : await db.selectFrom('user').select(['id', 'name']).where('id', '=', id).executeTakeFirst() ?? null
}

async function studyAndReport(db: Database, referralId: string): Promise<Pick<ReferralView, 'study' | 'report' | 'deliveries'>> {
  const study = await db.selectFrom('study').select(['id', 'number', 'state']).where('referralId', '=', referralId).where('state', '<>', 'entered-in-error').orderBy('createdAt', 'desc').executeTakeFirst() ?? null
  const report = study ? await db.selectFrom('report').select('id').where('studyId', '=', study.id).executeTakeFirst() : undefined
  const version = report ? await db.selectFrom('reportVersion').select(['status', 'version']).where('reportId', '=', report.id).orderBy('version', 'desc').executeTakeFirst() : undefined
  const deliveries = report
    ? await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('physician', 'physician.id', 'delivery.physicianId').select(['delivery.id', 'delivery.state', 'physician.name as recipient']).where('reportVersion.reportId', '=', report.id).orderBy('delivery.createdAt').execute()
    : []
  return { study, report: report ? { id: report.id, status: version?.status ?? 'preliminary', version: version?.version ?? 0 } : null, deliveries }
}

async function historyOf(db: Database, referralId: string): Promise<ReferralView['history']> {
  const rows = await db.selectFrom('stateChange').leftJoin('user', 'user.id', 'stateChange.byUserId').select(['at', 'user.name', 'fromState', 'toState', 'reason'])
    .where('subject', '=', 'referral').where('subjectId', '=', referralId).orderBy('stateChange.id').execute()
  return rows.map(row => ({ at: row.at, by: row.name ?? 'Orthodrome', from: row.fromState, to: row.toState, reason: row.reason }))
}

/** A referral with everything around it. */
export async function referralView(db: Database, referralId: string, today: string): Promise<ReferralView | undefined> {
  const row = await referralRecord(db, referralId)
  if (!row) return undefined
  const input = referralInputOf(row, await copiesOf(db, referralId))
  const copyPhysicians = (await Promise.all(input.copyPhysicianIds.map(id => physicianOf(db, id, today)))).filter(copy => copy !== null)
  const [patient, band, physician, uploads, booking, around, route, history, letters, clocks, owner, desk] = await Promise.all([
    patientById(db, row.patientId), patientBand(db, referralId, today), physicianOf(db, row.physicianId, today), uploadsOf(db, referralId),
    bookingOf(db, referralId), studyAndReport(db, referralId), routeOf(db, referralId), historyOf(db, referralId),
    lettersOf(db, referralId), policyInForce(db, 'clocks', row.siteId, today), ownerOf(db, row.ownerId), deskOriginOf(db, referralId),
  ])
  if (!patient || !band) return undefined
  const { id, number, state, stateSince, stateReason, protocol, revision, createdAt, receivedAt } = row
  return { ...input, id, number, state, stateSince, stateReason, protocol, revision, createdAt, receivedAt, owner, letters, desk, dueAt: dueOf(row, clocks.body), patient, band, physician, copyPhysicians, missing: missingForBooking(input), uploads, booking, ...around, route, history }
}

export async function siteOfUpload(db: Database, uploadId: string): Promise<string | null> {
  const row = await db.selectFrom('upload').leftJoin('referral', 'referral.id', 'upload.referralId').leftJoin('study', 'study.id', 'upload.studyId').select(['referral.siteId as ofReferral', 'study.siteId as ofStudy']).where('upload.id', '=', uploadId).where('removedAt', 'is', null).executeTakeFirst()
  return row?.ofStudy ?? row?.ofReferral ?? null
}
