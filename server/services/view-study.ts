import type { Database } from '#server/database/connection'
import { cautionAnswers, patientBand, routeOf } from '#server/database/queries/bands'
import { equipmentAt } from '#server/database/queries/equipment'
import { uploadsOf } from '#server/database/queries/referrals'
import { roomNames } from '#server/database/queries/site-calendar'
import { studyAround } from '#server/database/queries/study-around'
import { DomainError } from '#shared/errors'
import type { Confirmation, StudyView } from '#shared/schemas/bench'
import type { BenchChoices } from '#shared/schemas/bench-day'
import type { StudyState } from '#shared/states'
import { assessStoredStudy, type AssessedStudy } from './assess-stored-study'
import { peopleWho } from './people-who'
import { mayAt, type ServiceContext } from './context'
import { earlierValues } from './earlier-values'
import { recordView } from './record-view'

const recordable: readonly StudyState[] = ['planned', 'recording', 'returned']

async function namesOf(db: Database, { siteId, technologistId, readerId }: AssessedStudy['record']) {
  const site = await db.selectFrom('site').select('name').where('id', '=', siteId).executeTakeFirstOrThrow()
  const people = await db.selectFrom('user').select(['id', 'name']).where('id', 'in', [technologistId, readerId].filter(id => id !== null)).execute()
  const nameOf = (id: string | null) => people.find(person => person.id === id)?.name ?? null
  return { siteName: site.name, technologistName: nameOf(technologistId), readerName: nameOf(readerId) }
}

async function referralPart(db: Database, referralId: string): Promise<StudyView['referral']> {
  const row = await db.selectFrom('referral').selectAll().where('id', '=', referralId).executeTakeFirstOrThrow()
  const { symptoms, onset, examination, provisionalDiagnosis, previousStudies, urgency, side } = row
  const cautions = cautionAnswers(row.cautionsJson).map(({ id, label, answer }) => ({ id, label, answer }))
  return { question: row.clinicalQuestion, symptoms, onset, examination, provisionalDiagnosis, previousStudies, urgency, side, cautions }
}

async function choicesAt(db: Database, { siteId, studyDate }: AssessedStudy['record']): Promise<BenchChoices> {
  const [rooms, supervisors, equipment] = await Promise.all([roomNames(db, [siteId]), peopleWho(db, 'report.sign', siteId, studyDate), equipmentAt(db, siteId)])
  return { rooms: rooms.get(siteId) ?? [], supervisors, equipment: equipment.filter(each => !each.retired) }
}

/**
 * Everything the bench and the reading page need of a study, assessed now. Opening it is noted.
 * @throws DomainError 'not-found'
 */
export async function viewStudy(context: ServiceContext, id: string): Promise<StudyView> {
  const { db, actor } = context
  const { record, study, policy, assessment, cellRevisions, runRevisions, plannedRunIds } = await assessStoredStudy(context, id)
  const { number, state, stateSince, siteId, referralId, patientId, protocol, readerId, handOverNote, returnQuestion, returnRunId } = record
  const [band, route, referral, uploads, names, around, choices, earlier] = await Promise.all([patientBand(db, referralId), routeOf(db, referralId), referralPart(db, referralId), uploadsOf(db, referralId), namesOf(db, record), studyAround(db, record), choicesAt(db, record), earlierValues(context, record)])
  if (!band) throw new DomainError('not-found')
  recordView(context, { subject: 'study', subjectId: id, siteId, patientId })
  return {
    id, number, state, stateSince, siteId, referralId, patientId, protocol, band, route, referral, ...names,
    confirmation: record.confirmationJson ? JSON.parse(record.confirmationJson) as Confirmation : null,
    readerId, handOverNote, returnQuestion, returnRunId, study, cellRevisions, runRevisions, plannedRunIds, policy, adopted: policy.adopted, assessment, uploads, around, choices, earlier,
    mayRecord: recordable.includes(state) && mayAt(actor, 'study.record', siteId),
    mayRead: mayAt(actor, 'report.write', siteId),
    maySign: mayAt(actor, 'report.sign', siteId),
    emergency: actor.emergency ?? null,
  }
}
