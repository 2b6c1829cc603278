import type { Trx } from '#server/database/connection'
import type { Study } from '#server/database/tables/study'
import { techniqueOf } from '#shared/catalogue/nerves'
import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { assessStoredStudy } from './assess-stored-study'
import { recordAuditEvent } from './record-audit-event'
import { withdrawReady } from './withdraw-ready'

/** What is to be recorded, and by whom: a needle examination is done by the reader, while the study is with them. */
export interface Recording { actorId: string | null, technique: string | undefined }

const isReadersNeedle = (study: Study, recording: Recording | undefined) =>
  study.state === 'handed-over' && recording !== undefined && study.readerId === recording.actorId && techniqueOf(recording.technique ?? '')?.kind === 'needle'

/**
 * The study, if values may be recorded in it now: identity and side are confirmed, and it is not handed over;
 * the reader who has it may still enter needle findings.
 * @throws DomainError 'not-found' or 'wrong-state'
 */
export async function editableStudy(trx: Trx, studyId: string, recording?: Recording): Promise<Study> {
  const study = await trx.selectFrom('study').selectAll().where('id', '=', studyId).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  if (isReadersNeedle(study, recording)) return study
  if (study.state === 'planned') throw new DomainError('wrong-state', { message: 'Confirm identity, side and cautions first.', details: { state: study.state } })
  if (study.state !== 'recording' && study.state !== 'returned') throw new DomainError('wrong-state', { details: { state: study.state } })
  return study
}

/** Every change of what was recorded ends with this. */
export async function studyChanged(context: ServiceContext, trx: Trx, study: Study): Promise<void> {
  await trx.updateTable('study').set({ revision: study.revision + 1 }).where('id', '=', study.id).execute()
  await reopenAnswered(context, trx, study)
  await withdrawReady(context, trx, { studyId: study.id })
}

/** A reason speaks of what stood when it was given: where a change took that away, its question is open again. */
async function reopenAnswered(context: ServiceContext, trx: Trx, study: Study): Promise<void> {
  const kept = await trx.selectFrom('studyKeptCheck').select(['key', 'reason']).where('studyId', '=', study.id).execute()
  if (kept.length === 0) return
  const { remarks } = (await assessStoredStudy({ db: trx }, study.id)).assessment
  const standing = new Set(remarks.filter(remark => remark.kept !== undefined).map(remark => remark.key))
  for (const { key, reason } of kept.filter(one => !standing.has(one.key))) {
    await trx.deleteFrom('studyKeptCheck').where('studyId', '=', study.id).where('key', '=', key).execute()
    await recordAuditEvent(context, trx, { name: 'study.check-reopened', ...aboutStudy(study), data: { key, reason } })
  }
}

/** How an audit event names a study. */
export const aboutStudy = (study: Pick<Study, 'id' | 'siteId' | 'patientId'>) => ({ subject: 'study', subjectId: study.id, siteId: study.siteId, patientId: study.patientId })
