import type { EarlierStudy } from '#shared/calculations/types'
import type { ReportSnapshot } from '#shared/schemas/report'
import type { Database } from '../connection'

/** More would not be looked at; the newest count. */
const MOST = 5

export interface EarlierReport extends EarlierStudy { reportId: string, siteId: string }

/**
 * Signed studies of the same person before this one, newest first, as the newest version of each says; what was entered
 * in error is none. They may be of any site: whoever reads a study has the care of its patient.
 */
export async function earlierStudies(db: Database, { studyId, patientId, studyDate }: { studyId: string, patientId: string, studyDate: string }): Promise<EarlierReport[]> {
  const rows = await db.selectFrom('study').innerJoin('report', 'report.studyId', 'study.id').innerJoin('reportVersion', 'reportVersion.reportId', 'report.id')
    .select(['study.id as studyId', 'study.siteId', 'report.id as reportId', 'snapshotJson'])
    .where('study.patientId', '=', patientId).where('study.id', '<>', studyId).where('study.state', '=', 'read').where('study.studyDate', '<=', studyDate)
    .where('reportVersion.version', '=', eb => eb.selectFrom('reportVersion as newest').select(max => max.fn.max('newest.version').as('version')).whereRef('newest.reportId', '=', 'report.id'))
    .orderBy('study.studyDate', 'desc').orderBy('study.id').limit(MOST).execute()
  return rows.map(({ snapshotJson, ...row }) => {
    const { study, site, technologist, assessment } = JSON.parse(snapshotJson) as ReportSnapshot
    return { ...row, studyDate: study.studyDate, siteName: site.name, technologist, assessment }
  })
}
