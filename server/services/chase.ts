import { chaseable, unacknowledged } from '#server/database/queries/chase'
import { chaseDays, chaseDueAt } from '#shared/chase'
import type { ChaseRow } from '#shared/schemas/delivery'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'

/**
 * Makes a task of every report that was sent and not acknowledged for too long (shared/chase.ts). A task that was done is
 * made again after the same time: somebody followed it up and still nothing came.
 */
export async function chaseUnacknowledged(context: ServiceContext): Promise<number> {
  const oldest = new Date(context.clock().getTime() - Math.min(...Object.values(chaseDays)) * 86_400_000).toISOString()
  const waiting = (await unacknowledged(context.db, oldest)).filter(row => chaseDueAt(row.lastDoneAt ?? row.sentAt ?? row.stateSince, row.urgency) <= now(context))
  if (waiting.length === 0) return 0
  await context.db.transaction().execute(async (trx) => {
    for (const row of waiting) await createTask(context, trx, {
      kind: 'delivery-unacknowledged', subject: 'delivery', subjectId: row.id, siteId: row.siteId, ownerRole: 'administrator',
      sentence: `${row.number}, version ${row.version}, was sent to ${row.recipient}, ${row.practiceName}, and nobody acknowledged it. Telephone the practice, then record what became of it under Dispatch.`,
    })
  })
  return waiting.length
}

/** Everything that somebody has to go after, what is longest overdue first. */
export async function chaseList(context: ServiceContext, siteIds: readonly string[]): Promise<ChaseRow[]> {
  const rows = await chaseable(context.db, siteIds)
  return rows.map((row): ChaseRow => {
    const since = row.state === 'sent' ? row.sentAt ?? row.stateSince : row.stateSince
    const { sentAt: _sentAt, ...rest } = row
    return { ...rest, since, dueAt: row.state === 'sent' ? chaseDueAt(since, row.urgency) : since }
  }).filter(row => row.state !== 'sent' || row.dueAt <= now(context)).sort((a, b) => a.dueAt.localeCompare(b.dueAt))
}
