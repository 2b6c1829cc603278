import type { OtherDelivery } from '#shared/schemas/incident'
import { sql } from 'kysely'
import type { Database } from '../connection'

/** Incidents of these sites with what names them, open ones first, then the one that is due first. */
export async function incidentRows(db: Database, { siteIds, id, limit = 200 }: { siteIds: readonly string[], id?: string, limit?: number }) {
  return await db.selectFrom('incident').innerJoin('delivery', 'delivery.id', 'incident.deliveryId').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId')
    .innerJoin('study', 'study.id', 'report.studyId').innerJoin('site', 'site.id', 'incident.siteId').innerJoin('physician', 'physician.id', 'delivery.physicianId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .leftJoin('user as closer', 'closer.id', 'incident.closedBy').leftJoin('user as opener', 'opener.id', 'incident.openedBy')
    .selectAll('incident').select(['report.id as reportId', 'report.number as reportNumber', 'reportVersion.version', 'site.name as siteName', 'physician.name as recipient', 'practice.name as practiceName', 'practice.town', 'delivery.address', 'delivery.physicianId', 'delivery.practiceId', 'study.patientId', 'closer.name as closerName', 'opener.name as openerName'])
    .where('incident.siteId', 'in', siteIds).$if(id !== undefined, query => query.where('incident.id', '=', id ?? ''))
    .orderBy(sql`incident.closed_at IS NOT NULL`).orderBy('incident.awareAt').orderBy('incident.id').limit(limit).execute()
}

export async function siteOfIncident(db: Database, id: string): Promise<string | null> {
  return (await db.selectFrom('incident').select('siteId').where('id', '=', id).executeTakeFirst())?.siteId ?? null
}

/** Everything else that left for the same address, or for anybody of the same practice: more than one may have gone astray. */
export async function otherDeliveries(db: Database, { deliveryId, address, practiceId }: { deliveryId: string, address: string, practiceId: string }): Promise<(OtherDelivery & { siteId: string })[]> {
  const rows = await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId').innerJoin('patient', 'patient.id', 'study.patientId')
    .select(['delivery.id', 'delivery.siteId', 'report.id as reportId', 'report.number as reportNumber', 'reportVersion.version', 'familyName', 'givenName', 'recordNumber', 'delivery.state', 'delivery.sentAt'])
    .where('delivery.id', '<>', deliveryId).where(eb => eb.or([eb(eb.fn('lower', ['delivery.address']), '=', address.toLowerCase()), eb('delivery.practiceId', '=', practiceId)]))
    .where(eb => eb.or([eb('delivery.sentAt', 'is not', null), eb('delivery.state', 'in', ['uncertain', 'by-hand'])])).orderBy('delivery.createdAt', 'desc').limit(100).execute()
  return rows.map(({ familyName, givenName, ...row }) => ({ ...row, patientName: `${familyName}, ${givenName}` }))
}

/** Who has the report instead: living deliveries of any of its versions to other people. */
export async function sentInstead(db: Database, { reportId, physicianId, after }: { reportId: string, physicianId: string, after: string }) {
  return await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('physician', 'physician.id', 'delivery.physicianId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .select(['physician.name as recipient', 'practice.name as practiceName', 'practice.town']).distinct()
    .where('reportVersion.reportId', '=', reportId).where('delivery.physicianId', '<>', physicianId).where('delivery.state', '<>', 'withdrawn').where('delivery.createdAt', '>=', after).execute()
}
