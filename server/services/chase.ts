import { chaseable, unacknowledged } from '#server/database/queries/chase'
import { policyInForce } from '#server/database/queries/policies'
import type { Clocks } from '#shared/policies/clocks'
import type { ChaseRow } from '#shared/schemas/delivery'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { organisationDay } from './organisation-day'

type Hours = Clocks['acknowledge']

/** The hours of the policy "Clocks" that hold today. */
async function acknowledgeHours(context: ServiceContext): Promise<Hours> {
  return (await policyInForce(context.db, 'clocks', null, await organisationDay(context))).body.acknowledge
}

const dueAfter = (sentAt: string, hours: number) => new Date(Date.parse(sentAt) + hours * 3_600_000).toISOString()

/**
 * Makes a task of every report that was sent and not acknowledged within the hours of the policy "Clocks". A task that was done is
 * made again after the same time: somebody followed it up and still nothing came.
 */
export async function chaseUnacknowledged(context: ServiceContext): Promise<number> {
  const hours = await acknowledgeHours(context)
  const before = dueAfter(now(context), -Math.min(...Object.values(hours)))
  const waiting = (await unacknowledged(context.db, before)).filter(row => dueAfter(row.lastDoneAt ?? row.sentAt ?? row.stateSince, hours[row.urgency]) <= now(context))
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
  const hours = await acknowledgeHours(context)
  const rows = await chaseable(context.db, siteIds)
  return rows.map((row): ChaseRow => {
    const since = row.state === 'sent' ? row.sentAt ?? row.stateSince : row.stateSince
    const { sentAt: _sentAt, ...rest } = row
    return { ...rest, since, dueAt: row.state === 'sent' ? dueAfter(since, hours[row.urgency]) : since }
  }).filter(row => row.state !== 'sent' || row.dueAt <= now(context)).sort((a, b) => a.dueAt.localeCompare(b.dueAt))
}
