import { patientView } from '#server/database/queries/patients'
import { DomainError } from '#shared/errors'
import type { HistoryLine, OutsideStudyView, OutsideValue, PatientHistory } from '#shared/schemas/patient-history'
import { mayAt, type ServiceContext } from './context'
import { recordView } from './record-view'

/**
 * A person across all sites. That a study exists elsewhere is identity; to open it needs a role at its site, so its
 * line has no link and no question without one.
 * @throws DomainError 'not-found'
 */
export async function viewHistory(context: ServiceContext, id: string): Promise<PatientHistory> {
  const row = await context.db.selectFrom('patient').selectAll().where('id', '=', id).executeTakeFirst()
  if (!row) throw new DomainError('not-found')
  recordView(context, { subject: 'patient', subjectId: id, patientId: id })
  const into = row.mergedInto ? await context.db.selectFrom('patient').select(['id', 'recordNumber']).where('id', '=', row.mergedInto).executeTakeFirst() : undefined
  return { patient: patientView(row), mergedInto: into ?? null, lines: await linesOf(context, id), outside: await outsideStudiesOf(context, id), uploads: await uploadsOf(context, id), merges: await mergesOf(context, id) }
}

async function linesOf(context: ServiceContext, id: string): Promise<HistoryLine[]> {
  const referrals = await context.db.selectFrom('referral').innerJoin('site', 'site.id', 'referral.siteId').select(['referral.id', 'number', 'state', 'clinicalQuestion', 'siteId', 'site.name as siteName', 'referral.createdAt']).where('patientId', '=', id).execute()
  const studies = await context.db.selectFrom('study').innerJoin('site', 'site.id', 'study.siteId').innerJoin('referral', 'referral.id', 'study.referralId').select(['study.id', 'study.number', 'study.state', 'clinicalQuestion', 'study.siteId', 'site.name as siteName', 'studyDate']).where('study.patientId', '=', id).execute()
  const lines = [
    ...referrals.map(each => ({ kind: 'referral' as const, id: each.id, number: each.number, day: each.createdAt.slice(0, 10), siteName: each.siteName, state: each.state, open: mayAt(context.actor, 'referral.read', each.siteId), path: `/intake/${each.id}`, question: each.clinicalQuestion })),
    ...studies.map(each => ({ kind: 'study' as const, id: each.id, number: each.number, day: each.studyDate, siteName: each.siteName, state: each.state, open: mayAt(context.actor, 'study.read', each.siteId), path: mayAt(context.actor, 'report.write', each.siteId) ? `/reading/${each.id}` : `/bench/${each.id}`, question: each.clinicalQuestion })),
  ]
  return lines.sort((a, b) => b.day.localeCompare(a.day) || a.kind.localeCompare(b.kind)).map(({ open, path, question, ...line }) => ({ ...line, link: open ? path : null, question: open ? question : '' }))
}

/** Studies of other laboratories, the latest first; also for the reading page. */
export async function outsideStudiesOf(context: Pick<ServiceContext, 'db'>, patientId: string): Promise<OutsideStudyView[]> {
  const rows = await context.db.selectFrom('outsideStudy').innerJoin('user', 'user.id', 'outsideStudy.enteredBy').select(['outsideStudy.id', 'performedOn', 'place', 'summary', 'valuesJson', 'uploadId', 'user.name as enteredBy', 'enteredAt']).where('patientId', '=', patientId).where('removedAt', 'is', null).orderBy('performedOn', 'desc').execute()
  return rows.map(({ valuesJson, ...row }) => ({ ...row, values: JSON.parse(valuesJson) as OutsideValue[] }))
}

async function uploadsOf(context: ServiceContext, patientId: string): Promise<PatientHistory['uploads']> {
  const rows = await context.db.selectFrom('upload').innerJoin('referral', 'referral.id', 'upload.referralId').select(['upload.id', 'originalName', 'siteId']).where('referral.patientId', '=', patientId).where('removedAt', 'is', null).execute()
  return rows.filter(row => mayAt(context.actor, 'upload.read', row.siteId)).map(row => ({ id: row.id, name: row.originalName }))
}

async function mergesOf(context: ServiceContext, keptId: string): Promise<PatientHistory['merges']> {
  const rows = await context.db.selectFrom('patientMerge').innerJoin('patient', 'patient.id', 'patientMerge.mergedId').innerJoin('user', 'user.id', 'patientMerge.mergedBy')
    .select(['patientMerge.id', 'keptId', 'recordNumber as mergedNumber', 'familyName', 'givenName', 'reason', 'mergedAt', 'user.name as mergedBy']).where('keptId', '=', keptId).where('undoneAt', 'is', null).orderBy('mergedAt').execute()
  return rows.map(({ familyName, givenName, ...row }) => ({ ...row, mergedName: `${familyName}, ${givenName}` }))
}
