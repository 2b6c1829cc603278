import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { siteOf, techniqueOf } from '#shared/catalogue/nerves'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { recordAuditEvent } from './record-audit-event'
import { runIn } from './save-run'

const MOST_ROWS = 40

/** Rows stand distal to proximal, as the catalogue orders the sites; a site stimulated twice keeps the order of entry. */
async function insertInOrder(trx: Trx, run: { id: string, technique: string }, rowId: string, site: string): Promise<void> {
  const order = techniqueOf(run.technique)?.sites.map(known => known.id) ?? []
  const rows = await trx.selectFrom('studyRow').select(['id', 'site']).where('runId', '=', run.id).where('removedAt', 'is', null).orderBy('position').execute()
  if (rows.length >= MOST_ROWS) throw new DomainError('not-valid', { fields: [{ path: 'site', message: `A run has at most ${MOST_ROWS} rows.` }] })
  const before = rows.findLastIndex(row => order.indexOf(row.site) <= order.indexOf(site))
  const ids = rows.map(row => row.id).toSpliced(before + 1, 0, rowId)
  await trx.insertInto('studyRow').values({ id: rowId, runId: run.id, site, position: 0, removedAt: null }).execute()
  for (const [index, id] of ids.entries()) await trx.updateTable('studyRow').set({ position: index + 1 }).where('id', '=', id).execute()
}

/** Adds a stimulation site to a run. */
export async function addRow(context: ServiceContext, { id, runId, site }: { id: string, runId: string, site: string }): Promise<{ rowId: string }> {
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const run = await runIn(trx, id, runId)
    if (!siteOf(run.technique, site)) throw new DomainError('not-valid', { fields: [{ path: 'site', message: 'Choose a stimulation site of this technique.' }] })
    const rowId = randomUUID()
    await insertInOrder(trx, run, rowId, site)
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.row-added', ...aboutStudy(study), data: { runId, rowId, site } })
    return { rowId }
  })
}

/** Takes a stimulation site away; one with values only with a reason. */
export async function removeRow(context: ServiceContext, { id, rowId, reason }: { id: string, rowId: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const row = await trx.selectFrom('studyRow').innerJoin('studyRun', 'studyRun.id', 'studyRow.runId').select(['studyRow.id', 'runId', 'site']).where('studyRow.id', '=', rowId).where('studyId', '=', id).where('studyRow.removedAt', 'is', null).where('studyRun.removedAt', 'is', null).executeTakeFirst()
    if (!row) throw new DomainError('not-found')
    const value = await trx.selectFrom('studyCell').select('field').where('rowId', '=', rowId).where('entryJson', '<>', 'null').executeTakeFirst()
    if (value && reason.length < 3) throw new DomainError('not-valid', { fields: [{ path: 'reason', message: 'The row has values. Say why it is removed.' }] })
    await trx.updateTable('studyRow').set({ removedAt: now(context) }).where('id', '=', rowId).execute()
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.row-removed', ...aboutStudy(study), data: { runId: row.runId, rowId, site: row.site, reason } })
  })
}
