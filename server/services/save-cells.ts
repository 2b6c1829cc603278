import type { Trx } from '#server/database/connection'
import type { RunSettings } from '#server/database/queries/studies'
import type { Study } from '#server/database/tables/study'
import { techniqueOf } from '#shared/catalogue/nerves'
import { DomainError } from '#shared/errors'
import type { SaveCell, SavedCell } from '#shared/schemas/bench'
import { checkEntry } from './check-entry'
import { now, type ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { recordAuditEvent } from './record-audit-event'

interface Change { runId: string, rowId: string, field: string, before: unknown, after: unknown }
type Outcome = { answer: SavedCell, change?: Change }

/**
 * Saves cells, each for itself: compare-and-set on the cell's own revision, so that two people can type in one study and
 * only the same cell can collide; a repeat with the same save id is answered as before. A value that cannot be right is
 * refused with its sentence. All earlier values stay in the audit trail.
 * @throws DomainError 'wrong-state' when the study is not being recorded, 'not-found'
 */
export async function saveCells(context: ServiceContext, { id, cells }: { id: string, cells: readonly SaveCell[] }): Promise<{ cells: SavedCell[] }> {
  return context.db.transaction().execute(async (trx) => {
    const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirst()
    if (!study) throw new DomainError('not-found')
    const outcomes: Outcome[] = []
    for (const cell of cells) outcomes.push(await saveCell(context, trx, study, cell))
    const changes = outcomes.flatMap(outcome => outcome.change ?? [])
    if (changes.length > 0) {
      await noteFirstValue(context, trx, [...new Set(changes.map(change => change.runId))])
      await studyChanged(context, trx, study)
      await recordAuditEvent(context, trx, { name: 'study.cells-saved', ...aboutStudy(study), data: { cells: changes } })
    }
    return { cells: outcomes.map(outcome => outcome.answer) }
  })
}

async function saveCell(context: ServiceContext, trx: Trx, study: Study, cell: SaveCell): Promise<Outcome> {
  const { saveId, rowId, field, entry } = cell
  const repeated = await trx.selectFrom('studyCellSave').select(['rowId', 'field', 'revision', 'savedAt']).where('studyId', '=', study.id).where('saveId', '=', saveId).executeTakeFirst()
  if (repeated) return { answer: { saveId, rowId: repeated.rowId, field: repeated.field, saved: true, revision: repeated.revision, savedAt: repeated.savedAt } }
  const row = await trx.selectFrom('studyRow').innerJoin('studyRun', 'studyRun.id', 'studyRow.runId').select(['runId', 'site', 'technique']).where('studyRow.id', '=', rowId).where('studyId', '=', study.id).where('studyRow.removedAt', 'is', null).where('studyRun.removedAt', 'is', null).executeTakeFirst()
  // A repeat is answered even after hand-over; anything new needs a study that is being recorded.
  await editableStudy(trx, study.id, { actorId: context.actor.userId, technique: row?.technique })
  const technique = row && techniqueOf(row.technique)
  const refused = technique ? checkEntry(technique, row.site, field, entry) : 'The row was removed meanwhile.'
  if (!row || refused) return { answer: { saveId, rowId, field, saved: false, because: 'not-valid', message: refused ?? '' } }
  return compareAndSet(context, trx, study, cell, row.runId)
}

async function compareAndSet(context: ServiceContext, trx: Trx, study: Study, cell: SaveCell, runId: string): Promise<Outcome> {
  const { saveId, rowId, field, entry } = cell
  const stands = await trx.selectFrom('studyCell').innerJoin('user', 'user.id', 'studyCell.savedBy').select(['entryJson', 'revision', 'savedAt', 'user.name as by']).where('rowId', '=', rowId).where('field', '=', field).executeTakeFirst()
  const before: unknown = stands ? JSON.parse(stands.entryJson) : null
  if ((stands?.revision ?? 0) !== cell.revision) {
    return { answer: { saveId, rowId, field, saved: false, because: 'changed-meanwhile', theirs: { entry: before, revision: stands?.revision ?? 0, by: stands?.by ?? '', at: stands?.savedAt ?? '' } } }
  }
  const savedBy = context.actor.userId
  if (!savedBy) throw new DomainError('not-signed-in')
  const [savedAt, revision] = [now(context), cell.revision + 1]
  const values = { entryJson: JSON.stringify(entry), revision, savedAt, savedBy }
  await trx.insertInto('studyCell').values({ rowId, field, studyId: study.id, ...values }).onConflict(conflict => conflict.columns(['rowId', 'field']).doUpdateSet(values)).execute()
  await trx.insertInto('studyCellSave').values({ studyId: study.id, saveId, rowId, field, revision, savedAt }).execute()
  return { answer: { saveId, rowId, field, saved: true, revision, savedAt }, change: { runId, rowId, field, before, after: entry } }
}

/** When a run was recorded: at its first value, or when the paper says that it is entered from; at a later visit it is measured, not copied. */
async function noteFirstValue(context: ServiceContext, trx: Trx, runIds: string[]): Promise<void> {
  const later = await trx.selectFrom('studyLaterEntry').innerJoin('studyRun', 'studyRun.studyId', 'studyLaterEntry.studyId').select('measuredAt').where('studyRun.id', 'in', runIds)
    .where(eb => eb.not(eb.exists(eb.selectFrom('studyVisit').select('studyVisit.id').whereRef('studyVisit.studyId', '=', 'studyRun.studyId')))).executeTakeFirst()
  const runs = await trx.selectFrom('studyRun').select(['id', 'settingsJson']).where('id', 'in', runIds).execute()
  for (const run of runs) {
    const settings = JSON.parse(run.settingsJson) as RunSettings
    if (!settings.recordedAt) await trx.updateTable('studyRun').set({ settingsJson: JSON.stringify({ ...settings, recordedAt: later?.measuredAt ?? now(context) }) }).where('id', '=', run.id).execute()
  }
}
