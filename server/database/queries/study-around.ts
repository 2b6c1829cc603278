import type { Protocol } from '#shared/protocols'
import { overdueSentences } from '#shared/equipment'
import type { CircumstancesView, MoveView, StudyAround } from '#shared/schemas/bench-day'
import type { UploadView } from '#shared/schemas/referral'
import type { Database } from '../connection'
import type { Study } from '../tables/study'
import { equipmentView } from './equipment'

/** Everything that stands around a study at the bench: circumstances, comments, attachments, visits, where its values came from. */
export async function studyAround(db: Database, study: Pick<Study, 'id' | 'studyDate' | 'state'>): Promise<StudyAround> {
  const [circumstances, comments, attachments, visits, laterEntry, move, stopped, protocol] = await Promise.all([
    circumstancesOf(db, study.id), commentsOf(db, study.id), attachmentsOf(db, study.id), visitsOf(db, study.id), laterEntryOf(db, study.id), moveOf(db, study.id), stoppedOf(db, study.id), protocolOf(db, study.id),
  ])
  return { circumstances, overdue: circumstances.equipment.flatMap(each => overdueSentences(each, study.studyDate)), comments, attachments, visits, laterEntry, move, stopped, protocol }
}

async function circumstancesOf(db: Database, studyId: string): Promise<CircumstancesView> {
  const row = await db.selectFrom('studyCircumstances').leftJoin('user', 'user.id', 'studyCircumstances.supervisorId').selectAll('studyCircumstances').select('user.name').where('studyId', '=', studyId).executeTakeFirst()
  const equipment = await db.selectFrom('studyEquipment').innerJoin('equipment', 'equipment.id', 'studyEquipment.equipmentId').selectAll('equipment').where('studyId', '=', studyId).orderBy('equipment.name').execute()
  return {
    room: row?.room ?? '', supervision: row?.supervision ?? null, supervisorId: row?.supervisorId ?? null, supervisorName: row?.name ?? '',
    tolerance: row?.tolerance ?? null, toleranceNote: row?.toleranceNote ?? '', told: row?.told ?? '', revision: row?.revision ?? 0, equipment: equipment.map(equipmentView),
  }
}

async function commentsOf(db: Database, studyId: string): Promise<StudyAround['comments']> {
  return db.selectFrom('studyComment').innerJoin('user', 'user.id', 'studyComment.byUserId').select(['studyComment.id', 'runId', 'text', 'at', 'user.name as byName']).where('studyId', '=', studyId).orderBy('at').orderBy('studyComment.id').execute()
}

async function attachmentsOf(db: Database, studyId: string): Promise<UploadView[]> {
  return db.selectFrom('upload').innerJoin('user', 'user.id', 'upload.createdBy').select(['upload.id', 'originalName', 'mediaType', 'byteCount', 'upload.createdAt', 'user.name as createdBy'])
    .where('studyId', '=', studyId).where('removedAt', 'is', null).orderBy('upload.createdAt').execute()
}

async function visitsOf(db: Database, studyId: string): Promise<StudyAround['visits']> {
  const rows = await db.selectFrom('studyVisit').leftJoin('user', 'user.id', 'studyVisit.technologistId').select(['day', 'startedAt', 'reason', 'user.name']).where('studyId', '=', studyId).orderBy('startedAt').execute()
  return rows.map(({ name, ...visit }) => ({ ...visit, technologistName: name ?? '' }))
}

async function laterEntryOf(db: Database, studyId: string): Promise<StudyAround['laterEntry']> {
  const row = await db.selectFrom('studyLaterEntry').innerJoin('user', 'user.id', 'studyLaterEntry.enteredBy').select(['measuredAt', 'measuredBy', 'reason', 'enteredAt', 'user.name as enteredByName']).where('studyId', '=', studyId).executeTakeFirst()
  return row ?? null
}

async function moveOf(db: Database, studyId: string): Promise<MoveView | null> {
  const row = await db.selectFrom('studyMove').innerJoin('study as source', 'source.id', 'fromStudyId').innerJoin('study as target', 'target.id', 'toStudyId').innerJoin('user', 'user.id', 'byUserId').leftJoin('user as checker', 'checker.id', 'checkedBy')
    .select(['fromStudyId', 'toStudyId', 'source.number as fromNumber', 'target.number as toNumber', 'reason', 'studyMove.at', 'user.name as byName', 'checkedAt', 'checker.name as checkedByName'])
    .where(eb => eb.or([eb('fromStudyId', '=', studyId), eb('toStudyId', '=', studyId)])).orderBy('studyMove.at', 'desc').executeTakeFirst()
  if (!row) return null
  const came = row.toStudyId === studyId
  const { reason, at, byName, checkedAt, checkedByName } = row
  return { direction: came ? 'from' : 'to', studyId: came ? row.fromStudyId : row.toStudyId, number: came ? row.fromNumber : row.toNumber, reason, at, byName, checkedAt, checkedByName: checkedByName ?? '' }
}

/** Why it was stopped; kept also when a technical report follows. */
async function stoppedOf(db: Database, studyId: string): Promise<StudyAround['stopped']> {
  const row = await db.selectFrom('stateChange').leftJoin('user', 'user.id', 'byUserId').select(['reason', 'at', 'user.name']).where('subject', '=', 'study').where('subjectId', '=', studyId).where('toState', '=', 'stopped').orderBy('stateChange.id', 'desc').executeTakeFirst()
  return row ? { reason: row.reason, at: row.at, byName: row.name ?? '' } : null
}

async function protocolOf(db: Database, studyId: string): Promise<StudyAround['protocol']> {
  const row = await db.selectFrom('studyProtocol').selectAll().where('studyId', '=', studyId).executeTakeFirst()
  if (!row) return null
  const body = JSON.parse(row.bodyJson) as Protocol
  return { id: row.protocolId, label: row.label, version: row.version, basis: body.basis }
}
