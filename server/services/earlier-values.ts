import { loadStudy } from '#server/database/queries/studies'
import type { Study as StudyRecord } from '#server/database/tables/study'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { StudyView } from '#shared/schemas/bench'
import type { Run } from '#shared/schemas/study'
import { mayAt, type ServiceContext } from './context'
import { recordView } from './record-view'

type Earlier = StudyView['earlier']

/** How many studies back are looked at. */
const MOST_STUDIES = 3
/** Kinds whose rows are told apart by their site alone; trains and muscles are not compared cell by cell. */
const comparable = ['motor', 'sensory', 'mixed', 'f-wave', 'h-reflex', 'blink']

/**
 * What earlier studies of the same patient hold, technique by technique and site by site, from the latest study that has
 * it: shown faint beside the cells, never put in. Only studies of sites where the person records or reads, handed over or
 * read; of a run repeated warm the repeat. Each one that is shown is noted as seen.
 */
export async function earlierValues(context: ServiceContext, record: StudyRecord): Promise<Earlier> {
  const { db, actor } = context
  const studies = await db.selectFrom('study').innerJoin('site', 'site.id', 'study.siteId').select(['study.id', 'siteId', 'studyDate', 'site.name as siteName'])
    .where('patientId', '=', record.patientId).where('study.id', '<>', record.id).where('study.state', 'in', ['handed-over', 'read']).where('studyDate', '<=', record.studyDate)
    .orderBy('studyDate', 'desc').orderBy('study.createdAt', 'desc').limit(MOST_STUDIES).execute()
  const found: Earlier = {}
  for (const study of studies.filter(({ siteId }) => mayAt(actor, 'study.record', siteId) || mayAt(actor, 'report.write', siteId))) {
    const runs = (await loadStudy(db, study.id))?.study.runs ?? []
    const added = standing(runs).map(run => addRun(found, run, study)).some(Boolean)
    if (added) recordView(context, { subject: 'study', subjectId: study.id, siteId: study.siteId, patientId: record.patientId })
  }
  return found
}

function standing(runs: readonly Run[]): Run[] {
  const repeated = new Set(runs.map(run => run.repeats))
  return runs.filter(run => !repeated.has(run.id) && comparable.includes(techniqueOf(run.technique)?.kind ?? ''))
}

function addRun(found: Earlier, run: Run, { id, studyDate, siteName }: { id: string, studyDate: string, siteName: string }): boolean {
  const key = `${run.technique}/${run.side}`
  const rows = Object.fromEntries(run.rows.filter(row => Object.keys(row.values).length > 0).map(row => [row.site, row.values]))
  if (found[key] || Object.keys(rows).length === 0) return false
  found[key] = { studyId: id, studyDate, siteName, rows }
  return true
}
