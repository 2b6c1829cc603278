import type { Trx } from '#server/database/connection'
import type { RunSettings } from '#server/database/queries/studies'
import { DomainError } from '#shared/errors'
import { reportDraftSchema } from '#shared/schemas/report'
import { canonicalJson } from './canonical-json'
import { now, type ServiceContext } from './context'
import { aboutStudy, studyChanged } from './editable-study'
import { keepSummary } from './hand-over-study'
import { isEmptyRun } from './lay-out-runs'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'
import { draftOf } from './reading-facts'
import { ensureReport } from './save-draft'

/** The task that asked what follows is done with the decision. */
async function closeTask(context: ServiceContext, trx: Trx, referralId: string, resolution: string): Promise<void> {
  await trx.updateTable('task').set({ doneAt: now(context), doneBy: context.actor.userId, resolution }).where('kind', '=', 'study-stopped').where('subjectId', '=', referralId).where('doneAt', 'is', null).execute()
}

async function stoppedStudy(trx: Trx, id: string) {
  const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  if (study.state !== 'stopped') throw new DomainError('wrong-state', { details: { state: study.state } })
  return study
}

/** What was planned and not reached says so; true when at least one run has values. */
async function sayNotDone(trx: Trx, studyId: string, reason: string): Promise<boolean> {
  const runs = await trx.selectFrom('studyRun').select(['id', 'settingsJson', 'revision']).where('studyId', '=', studyId).where('removedAt', 'is', null).execute()
  let measured = false
  for (const run of runs) {
    const settings = JSON.parse(run.settingsJson) as RunSettings
    if (!await isEmptyRun(trx, run.id)) measured = true
    else if (!settings.notDoneBecause) await trx.updateTable('studyRun').set({ settingsJson: JSON.stringify({ ...settings, notDoneBecause: reason }), revision: run.revision + 1 }).where('id', '=', run.id).execute()
  }
  return measured
}

/**
 * What was measured before a study was stopped goes to the reader for a report that is marked as technical only; the
 * reason of the stop stands in it. The referral is answered when it is signed.
 * @throws DomainError 'wrong-state', also when nothing was measured
 */
export async function askTechnicalReport(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await stoppedStudy(trx, id)
    const reason = `the study was stopped: ${study.stateReason}`.slice(0, 500)
    if (!await sayNotDone(trx, id, reason)) throw new DomainError('wrong-state', { message: 'Nothing was measured, so there is nothing to report. Close the referral with a reason instead.' })
    await moveState(context, trx, { subject: 'study', id, from: 'stopped', to: 'handed-over', reason: 'technical report' })
    await studyChanged(context, trx, study)
    const report = await ensureReport(context, trx, study)
    const draft = reportDraftSchema.parse({ ...draftOf(report), technicalOnly: true, limitations: [`The study was stopped: ${study.stateReason}`.slice(0, 500)] })
    await trx.updateTable('report').set({ draftJson: canonicalJson(draft), draftRevision: report.draftRevision + 1 }).where('id', '=', report.id).execute()
    await keepSummary(context, trx, id)
    await closeTask(context, trx, study.referralId, 'technical report')
    await recordAuditEvent(context, trx, { name: 'study.report-asked', ...aboutStudy(study), data: {} })
  })
}

/** Nothing follows the stopped study: its referral is closed with the reason, and waits for nobody. */
export async function closeStopped(context: ServiceContext, { id, reason }: { id: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await stoppedStudy(trx, id)
    await moveState(context, trx, { subject: 'referral', id: study.referralId, from: 'attended', to: 'cancelled', reason })
    await closeTask(context, trx, study.referralId, reason)
    await recordAuditEvent(context, trx, { name: 'referral.cancelled', subject: 'referral', subjectId: study.referralId, siteId: study.siteId, patientId: study.patientId, data: {} })
  })
}
