import type { Trx } from '#server/database/connection'
import type { Study } from '#server/database/tables/study'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'

/** @throws DomainError 'not-found', or 'wrong-state' when it does not wait for a reader */
export async function studyToRead(trx: Trx, id: string): Promise<Study> {
  const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  if (study.state === 'read') throw new DomainError('already-signed')
  if (study.state !== 'handed-over' && study.state !== 'returned') throw new DomainError('wrong-state', { details: { state: study.state } })
  return study
}

/** Takes a study to read, or over from a reader who is away; the trail keeps from whom. */
export async function takeStudy(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, id)
    if (study.readerId === context.actor.userId) return
    await trx.updateTable('study').set({ readerId: context.actor.userId, takenAt: now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.taken', ...aboutStudy(study), data: { from: study.readerId } })
  })
}

/** Gives it back to the queue; the draft stays. */
export async function releaseStudy(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, id)
    if (study.readerId === null) return
    if (study.readerId !== context.actor.userId) throw new DomainError('wrong-state', { message: 'Another reader has this study. Take it over first.' })
    await trx.updateTable('study').set({ readerId: null, takenAt: null }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.released', ...aboutStudy(study), data: {} })
  })
}

/**
 * Back to the bench with a question, perhaps about one run. The reader keeps the study and the draft.
 * @throws DomainError 'not-valid' when the run is not one of the study, 'wrong-state'
 */
export async function returnStudy(context: ServiceContext, { id, question, runId }: { id: string, question: string, runId: string | null }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, id)
    const run = runId ? await trx.selectFrom('studyRun').select('id').where('id', '=', runId).where('studyId', '=', id).where('removedAt', 'is', null).executeTakeFirst() : undefined
    if (runId && !run) throw new DomainError('not-valid', { fields: [{ path: 'runId', message: 'Choose a run of this study.' }] })
    await moveState(context, trx, { subject: 'study', id, from: 'handed-over', to: 'returned', reason: question })
    await trx.updateTable('study').set({ returnQuestion: question, returnRunId: runId, readerId: study.readerId ?? context.actor.userId, takenAt: study.takenAt ?? now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.returned', ...aboutStudy(study), data: { runId } })
  })
}
