import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { techniqueOf, techniqueTitle } from '#shared/catalogue/nerves'
import { DomainError } from '#shared/errors'
import type { Run } from '#shared/schemas/study'
import { assessStoredStudy, type AssessedStudy } from './assess-stored-study'
import { now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'

export interface MissingForHandOver { key: string, sentence: string, runId?: string }

/** What lists read without assessing again: kept with the study at hand-over. */
export interface StudySummary {
  flagged: number
  runs: number
  openChecks: number
  /** Questions that stood at hand-over, by kind: how many, and how many were kept with a reason. */
  checks: Record<string, { asked: number, kept: number }>
  calculationVersion: string
}

const isEmpty = (run: Run) => run.rows.every(row => Object.keys(row.values).length === 0 && !row.series?.length && Object.keys(row.ordinals ?? {}).length === 0)

function titleOf(run: Run): string {
  const technique = techniqueOf(run.technique)
  return `${run.side.toUpperCase()} ${technique ? techniqueTitle(technique) : run.technique}`
}

/** What keeps a study at the bench: nothing confirmed, a value that cannot be right, a planned run without values or reason. */
export function missingForHandOver({ record, study, assessment, plannedRunIds }: AssessedStudy): MissingForHandOver[] {
  const confirmed = record.confirmationJson === null ? [{ key: 'confirmation', sentence: 'Confirm identity, side and cautions.' }] : []
  const stops = assessment.remarks.filter(remark => remark.strength === 'stop').map(({ key, sentence, runId }) => ({ key, sentence, ...(runId ? { runId } : {}) }))
  const unsaid = study.runs.filter(run => plannedRunIds.includes(run.id) && isEmpty(run) && !run.notDoneBecause)
    .map(run => ({ key: `not-done/${run.id}`, sentence: `${titleOf(run)} was planned and has no values. Enter them, or say why it was not done.`, runId: run.id }))
  const nothing = study.runs.every(isEmpty) ? [{ key: 'nothing-recorded', sentence: 'Nothing was recorded. Stop the study with a reason instead.' }] : []
  return [...confirmed, ...stops, ...unsaid, ...nothing]
}

/** Values that came from another record were typed for another age and height: somebody looks at them again first. */
async function uncheckedMove(trx: Trx, id: string): Promise<MissingForHandOver[]> {
  const move = await trx.selectFrom('studyMove').select('fromStudyId').where('toStudyId', '=', id).where('checkedAt', 'is', null).executeTakeFirst()
  return move ? [{ key: 'moved-values', sentence: 'The values came from another record. Look at each of them, and confirm that they belong to this patient.' }] : []
}

/** What lists read without assessing again, for a study that comes to the reader by another way than the hand-over. */
export async function keepSummary(context: ServiceContext, trx: Trx, id: string): Promise<void> {
  const summary = summaryOf(await assessStoredStudy({ db: trx }, id))
  await trx.updateTable('study').set({ handedOverAt: now(context), summaryJson: JSON.stringify(summary) }).where('id', '=', id).execute()
}

function summaryOf({ assessment, study }: AssessedStudy): StudySummary {
  return {
    flagged: assessment.flagged.length, runs: study.runs.length, calculationVersion: assessment.calculationVersion,
    openChecks: assessment.remarks.filter(remark => remark.strength === 'check' && !remark.kept).length, checks: checksOf(assessment),
  }
}

function checksOf({ remarks }: AssessedStudy['assessment']): StudySummary['checks'] {
  const checks: StudySummary['checks'] = {}
  for (const { key, strength, kept } of remarks) {
    if (strength !== 'check') continue
    const one = checks[key.split('/')[0] ?? ''] ??= { asked: 0, kept: 0 }
    one.asked += 1
    if (kept) one.kept += 1
  }
  return checks
}

/**
 * Hands a study to the reader, if nothing that must be there is missing.
 * @throws DomainError 'not-ready' with `details.missing`; 'wrong-state'
 */
export async function handOverStudy(context: ServiceContext, { id, note }: { id: string, note: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const assessed = await assessStoredStudy({ db: trx }, id)
    const { record } = assessed
    if (record.state !== 'recording' && record.state !== 'returned') throw new DomainError('wrong-state', { details: { state: record.state } })
    const missing = [...missingForHandOver(assessed), ...await uncheckedMove(trx, id)]
    if (missing.length) throw new DomainError('not-ready', { message: 'The study cannot be handed over yet. The list says what is missing.', details: { missing }, fields: missing.map(({ key, sentence }) => ({ path: key, message: sentence })) })
    await moveState(context, trx, { subject: 'study', id, from: ['recording', 'returned'], to: 'handed-over' })
    const summary = summaryOf(assessed)
    await trx.updateTable('study').set({ handedOverAt: now(context), handOverNote: note, summaryJson: JSON.stringify(summary) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.handed-over', ...aboutStudy(record), data: { flagged: summary.flagged, runs: summary.runs, fingerprint: assessed.fingerprint } })
  })
}

/** Ends a study that cannot go on, with the reason. What follows is for the administrator to settle. */
export async function stopStudy(context: ServiceContext, { id, reason }: { id: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    await moveState(context, trx, { subject: 'study', id, from: ['planned', 'recording', 'returned'], to: 'stopped', reason })
    const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
    await trx.insertInto('task').values({
      id: randomUUID(), kind: 'study-stopped', subject: 'referral', subjectId: study.referralId, siteId: study.siteId, ownerId: null, ownerRole: 'administrator',
      sentence: `${study.number} was stopped. Tell the referring physician, and enter a new referral if it is to be repeated.`, createdAt: now(context), dueAt: null, doneAt: null, doneBy: null,
    }).execute()
    await recordAuditEvent(context, trx, { name: 'study.stopped', ...aboutStudy(study), data: {} })
  })
}
