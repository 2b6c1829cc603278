import type { VersionLine } from '#shared/report/index'
import type { Database } from '../connection'
import type { Report } from '../tables/report'
import type { ReportVersion } from '../tables/report-version'

export async function reportOfStudy(db: Database, studyId: string): Promise<Report | undefined> {
  return await db.selectFrom('report').selectAll().where('studyId', '=', studyId).executeTakeFirst()
}

export async function siteOfReport(db: Database, reportId: string): Promise<string | null> {
  const row = await db.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId').select('study.siteId').where('report.id', '=', reportId).executeTakeFirst()
  return row?.siteId ?? null
}

/** The site and the patient of a report, as a look at it is noted. */
export async function placeOfReport(db: Database, reportId: string): Promise<{ siteId: string, patientId: string } | undefined> {
  return await db.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId').select(['study.siteId', 'study.patientId']).where('report.id', '=', reportId).executeTakeFirst()
}

/** The version asked for, or the latest. */
export async function reportVersion(db: Database, reportId: string, version?: number): Promise<ReportVersion | undefined> {
  return await db.selectFrom('reportVersion').selectAll().where('reportId', '=', reportId)
    .$if(version !== undefined, query => query.where('version', '=', version ?? 0))
    .orderBy('version', 'desc').executeTakeFirst()
}

/** All versions in order, without their content. */
export async function versionLines(db: Database, reportId: string): Promise<(VersionLine & { id: string })[]> {
  return await db.selectFrom('reportVersion').select(['id', 'version', 'status', 'signedAt', 'signedName', 'reason']).where('reportId', '=', reportId).orderBy('version').execute()
}
