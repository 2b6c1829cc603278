import { now, type ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { recordAuditEvent } from './record-audit-event'
import { DomainError } from '#shared/errors'

/** Keeps a questioned value, with the reason that goes with it into the report. */
export async function keepCheck(context: ServiceContext, { id, key, reason }: { id: string, key: string, reason: string }): Promise<void> {
  const keptBy = context.actor.userId
  if (!keptBy) throw new DomainError('not-signed-in')
  await context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const values = { reason, keptBy, keptAt: now(context) }
    await trx.insertInto('studyKeptCheck').values({ studyId: id, key, ...values }).onConflict(conflict => conflict.columns(['studyId', 'key']).doUpdateSet(values)).execute()
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.check-kept', ...aboutStudy(study), data: { key, reason } })
  })
}

/** Asks the question again. */
export async function reopenCheck(context: ServiceContext, { id, key }: { id: string, key: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const kept = await trx.deleteFrom('studyKeptCheck').where('studyId', '=', id).where('key', '=', key).returning('reason').executeTakeFirst()
    if (!kept) throw new DomainError('not-found')
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.check-reopened', ...aboutStudy(study), data: { key, reason: kept.reason } })
  })
}
