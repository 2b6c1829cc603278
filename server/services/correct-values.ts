import type { Trx } from '#server/database/connection'
import type { Study as StudyRecord } from '#server/database/tables/study'
import { techniqueOf } from '#shared/catalogue/nerves'
import { DomainError, type FieldError } from '#shared/errors'
import { applyCorrections, entryIn, type Correction } from '#shared/report/corrections'
import type { Run, Study } from '#shared/schemas/study'
import { checkEntry } from './check-entry'
import { now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { recordAuditEvent } from './record-audit-event'

/** Why a correction is refused; null when it can be made. */
function complaint(correction: Correction, run: Run | undefined): string | null {
  if (!run) return 'The run is not one of the signed study.'
  if (correction.kind !== 'cell') return null
  const row = run.rows.find(each => each.id === correction.rowId)
  const technique = techniqueOf(run.technique)
  if (!row || !technique) return 'The row is not one of the signed study.'
  return checkEntry(technique, row.site, correction.field, correction.entry)
}

/**
 * The signed study with its corrections.
 * @throws DomainError 'not-valid' for a value that cannot be right, or a run that is not there
 */
export function correctedStudy(study: Study, corrections: readonly Correction[]): Study {
  const fields = corrections.flatMap((correction, index): FieldError[] => {
    const message = complaint(correction, study.runs.find(run => run.id === correction.runId))
    return message ? [{ path: `corrections[${index}]`, message }] : []
  })
  if (fields.length > 0) throw new DomainError('not-valid', { fields })
  return applyCorrections(study, corrections)
}

/** Brings the stored study to what the corrected version says, in the transaction of its signature; the trail keeps what stood before. */
export async function storeCorrections(context: ServiceContext, trx: Trx, study: StudyRecord, before: Study, corrections: readonly Correction[]): Promise<void> {
  if (corrections.length === 0) return
  for (const correction of corrections) await store(context, trx, study.id, correction)
  await trx.updateTable('study').set({ revision: study.revision + 1 }).where('id', '=', study.id).execute()
  await recordAuditEvent(context, trx, { name: 'study.values-corrected', ...aboutStudy(study), data: { changes: corrections.map(correction => changeOf(correction, before)) } })
}

function changeOf(correction: Correction, before: Study) {
  const run = before.runs.find(each => each.id === correction.runId)
  const { runId } = correction
  if (correction.kind === 'cell') return { runId, rowId: correction.rowId, field: correction.field, before: entryIn(run?.rows.find(row => row.id === correction.rowId), correction.field), after: correction.entry }
  return correction.kind === 'side' ? { runId, field: 'side', before: run?.side, after: correction.side } : { runId, field: 'run', before: run?.technique, after: null }
}

async function store(context: ServiceContext, trx: Trx, studyId: string, correction: Correction): Promise<void> {
  if (correction.kind === 'side') await trx.updateTable('studyRun').set(eb => ({ side: correction.side, revision: eb('revision', '+', 1) })).where('id', '=', correction.runId).where('studyId', '=', studyId).execute()
  else if (correction.kind === 'remove-run') await trx.updateTable('studyRun').set({ removedAt: now(context) }).where('id', '=', correction.runId).where('studyId', '=', studyId).execute()
  else await storeCell(context, trx, studyId, correction)
}

async function storeCell(context: ServiceContext, trx: Trx, studyId: string, { rowId, field, entry }: Extract<Correction, { kind: 'cell' }>): Promise<void> {
  const [entryJson, savedAt, savedBy] = [JSON.stringify(entry), now(context), context.actor.userId!]
  await trx.insertInto('studyCell').values({ rowId, field, studyId, entryJson, revision: 1, savedAt, savedBy })
    .onConflict(conflict => conflict.columns(['rowId', 'field']).doUpdateSet(eb => ({ entryJson, savedAt, savedBy, revision: eb('studyCell.revision', '+', 1) }))).execute()
}
