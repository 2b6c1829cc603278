import type { Trx } from '#server/database/connection'
import { cellsBehind } from '#shared/calculations/plausibility/kept-answer'
import { DomainError } from '#shared/errors'
import { assessStoredStudy } from './assess-stored-study'
import { now, type ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { recordAuditEvent } from './record-audit-event'

async function askedNow(trx: Trx, id: string, key: string) {
  const { study, assessment } = await assessStoredStudy({ db: trx }, id)
  const remark = assessment.remarks.find(one => one.key === key && one.strength === 'check')
  if (!remark) throw new DomainError('not-valid', { fields: [{ path: 'key', message: 'This is not asked any more: the values changed meanwhile.' }] })
  return { sentence: remark.sentence, cellsJson: JSON.stringify(cellsBehind(study, remark)) }
}

/**
 * Keeps a questioned value, with the reason that goes with it into the report. The reason is bound to the question as it
 * is worded now and to the values it rests on: when they change it is asked again.
 * @throws DomainError 'not-valid' when the question is not asked (any more)
 */
export async function keepCheck(context: ServiceContext, { id, key, reason }: { id: string, key: string, reason: string }): Promise<void> {
  const keptBy = context.actor.userId
  if (!keptBy) throw new DomainError('not-signed-in')
  await context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const values = { reason, ...await askedNow(trx, id, key), keptBy, keptAt: now(context) }
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
