import { patientBand, routeOf } from '#server/database/queries/bands'
import { reportVersion, versionLines } from '#server/database/queries/reports'
import type { ReportVersion } from '#server/database/tables/report-version'
import { DomainError } from '#shared/errors'
import type { ReportView } from '#shared/schemas/report'
import type { ServiceContext } from './context'
import { recordView } from './record-view'
import { intactSnapshot } from './verify-version'

/** @throws DomainError 'not-found' */
export async function versionAsked(context: ServiceContext, reportId: string, version?: number): Promise<ReportVersion> {
  const row = await reportVersion(context.db, reportId, version)
  if (!row) throw new DomainError('not-found')
  return row
}

/**
 * A signed version as a page: from its frozen copy, with what became of it since.
 * @throws DomainError 'not-found', 'altered'
 */
export async function viewReport(context: ServiceContext, { reportId, version }: { reportId: string, version?: number }): Promise<ReportView> {
  const row = await versionAsked(context, reportId, version)
  const snapshot = intactSnapshot(row)
  const lines = await versionLines(context.db, reportId)
  const place = await context.db.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId').select(['study.siteId', 'study.patientId', 'study.referralId']).where('report.id', '=', reportId).executeTakeFirstOrThrow()
  const pdf = await context.db.selectFrom('reportPdf').select('sha256').where('reportVersionId', '=', row.id).executeTakeFirst()
  const band = await patientBand(context.db, place.referralId)
  if (!band) throw new DomainError('not-found')
  recordView(context, { subject: 'report', subjectId: reportId, siteId: place.siteId, patientId: place.patientId })
  return {
    reportId, number: snapshot.number, version: row.version, status: row.status, snapshot, sha256: row.snapshotSha256, auditHead: row.auditHead, pdfSha256: pdf?.sha256 ?? null,
    superseded: lines.some(line => line.version > row.version),
    versions: lines.map(({ version: number, status, signedAt, signedName, reason }) => ({ version: number, status, signedAt, signedName, reason })),
    band, route: await routeOf(context.db, place.referralId),
  }
}
