import { awayOn } from '#server/database/queries/absences'
import { holdersByBurden, openOverdueTasks, overdueKinds, waitingItems, type WaitingItem } from '#server/database/queries/overdue'
import { policyInForce } from '#server/database/queries/policies'
import type { Clocks } from '#shared/policies/clocks'
import type { Role } from '#shared/permissions'
import { now, type ServiceContext } from './context'
import { createTask, type NewTask } from './create-task'
import { organisationDay } from './organisation-day'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'

const hourMs = 3_600_000
const after = (since: string, hours: number) => new Date(Date.parse(since) + hours * hourMs).toISOString()
interface Round { clocks: Clocks, day: string, at: string }

/**
 * Makes every overdue thing the task of a named person, who is told by mail; tells the medical director when it stays
 * overdue; closes the tasks of what was settled meanwhile. How long is long: the policy "Clocks".
 * @returns how many tasks were made
 */
export async function raiseOverdue(context: ServiceContext): Promise<number> {
  const day = await organisationDay(context)
  const round: Round = { day, at: now(context), clocks: (await policyInForce(context.db, 'clocks', null, day)).body }
  const waiting = await waitingItems(context.db)
  await closeSettled(context, waiting)
  let made = 0
  for (const item of waiting) {
    const dueAt = after(item.since, round.clocks[overdueKinds[item.kind].clock][item.urgency])
    if (dueAt > round.at) continue
    made += await askSomebody(context, round, item, dueAt)
    if (after(dueAt, round.clocks.escalate[item.urgency]) <= round.at) made += await tellDirector(context, round, item, dueAt)
  }
  return made
}

/** A task without its waiting thing is done by itself. */
async function closeSettled(context: ServiceContext, waiting: readonly WaitingItem[]): Promise<void> {
  const still = new Set(waiting.map(item => `${item.kind}/${item.subjectId}`))
  const settled = (await openOverdueTasks(context.db)).filter(task => !still.has(`${task.kind}/${task.subjectId}`))
  for (const { id, kind, subjectId } of settled) {
    await context.db.updateTable('task').set({ doneAt: now(context), resolution: 'Settled: it waits no longer.' }).where('doneAt', 'is', null)
      .where(eb => eb.or([eb('id', '=', id), eb.and([eb('kind', '=', `${kind}-escalated`), eb('subjectId', '=', subjectId)])])).execute()
  }
}

function askSomebody(context: ServiceContext, round: Round, item: WaitingItem, dueAt: string): Promise<number> {
  const { role, sentence } = overdueKinds[item.kind]
  return giveTo(context, round, { kind: item.kind, subject: item.subject, subjectId: item.subjectId, siteId: item.siteId, sentence: sentence(item.number), dueAt }, role, item.ownerId)
}

function tellDirector(context: ServiceContext, round: Round, item: WaitingItem, dueAt: string): Promise<number> {
  const sentence = `${item.number} has been overdue since ${dueAt.slice(0, 10)} and nobody settled it. See that somebody does.`
  return giveTo(context, round, { kind: `${item.kind}-escalated`, subject: item.subject, subjectId: item.subjectId, siteId: item.siteId, sentence, dueAt }, 'medical-director', null)
}

/** One task for each overdue thing, ever: one that was closed by hand does not come back while the thing waits on. */
async function giveTo(context: ServiceContext, round: Round, task: NewTask & { siteId: string }, role: Role, wanted: string | null): Promise<number> {
  const known = await context.db.selectFrom('task').select('id').where('kind', '=', task.kind).where('subjectId', '=', task.subjectId).where('dueAt', '=', task.dueAt ?? '').executeTakeFirst()
  if (known) return 0
  const person = await personFor(context, round, task.siteId, role, wanted)
  await context.db.transaction().execute(async (trx) => {
    await createTask(context, trx, { ...task, ...(person ? { ownerId: person.id } : { ownerRole: role }) })
    await recordAuditEvent(context, trx, { name: 'clock.passed', subject: task.subject, subjectId: task.subjectId, siteId: task.siteId, data: { kind: task.kind, dueAt: task.dueAt ?? '' } })
    if (person) await queueMail(context, trx, { template: 'overdue', toAddress: person.email, data: { sentence: task.sentence, path: '/' } })
  })
  return 1
}

/** The reader who took it, or who covers for them; else the holder of the role who is there and has least to do. */
async function personFor(context: ServiceContext, { day }: Round, siteId: string, role: Role, wanted: string | null): Promise<{ id: string, email: string } | undefined> {
  const holders = await holdersByBurden(context.db, siteId, role, day)
  const away = await awayOn(context.db, [...holders.map(holder => holder.id), ...(wanted ? [wanted] : [])], day)
  const named = wanted ? away.get(wanted)?.coveredBy ?? wanted : null
  return holders.find(holder => holder.id === named) ?? holders.find(holder => !away.has(holder.id))
}
