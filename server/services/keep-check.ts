import type { Trx } from '#server/database/connection'
import type { Study } from '#server/database/tables/study'
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

export interface Corrected { runId: string, rowId: string, field: string, before: unknown }

/**
 * A reason speaks of the value that stood when it was given: once that is corrected, its questions are open again, those
 * about the row's or the run's derived values too. A value that is entered for the first time takes no reason away.
 */
export async function reopenCorrected(context: ServiceContext, trx: Trx, study: Study, changes: readonly Corrected[]): Promise<void> {
  const corrected = changes.filter(change => change.before !== null)
  if (corrected.length === 0) return
  const kept = await trx.selectFrom('studyKeptCheck').select(['key', 'reason']).where('studyId', '=', study.id).execute()
  for (const { key, reason } of kept.filter(check => corrected.some(change => concerns(check.key, change)))) {
    await trx.deleteFrom('studyKeptCheck').where('studyId', '=', study.id).where('key', '=', key).execute()
    await recordAuditEvent(context, trx, { name: 'study.check-reopened', ...aboutStudy(study), data: { key, reason } })
  }
}

/** Questions that compare one cell with its own range; all others rest on several values of the run. */
const ofOneCell = ['unusual', 'distance-unusual', 'short-segment', 'latency-too-short', 'h-range']

/** A key is code, run, row, quantity. */
function concerns(key: string, { runId, rowId, field }: Corrected): boolean {
  const [code = '', run, row, quantity] = key.split('/')
  if (run !== runId) return false
  return !ofOneCell.includes(code) || quantity === undefined || (row === rowId && quantity === field)
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
