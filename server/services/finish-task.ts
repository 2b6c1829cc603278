import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

/**
 * Closes a task, by its owner or someone who holds its role at its site.
 * @throws DomainError 'not-found' when it is not one of theirs, 'wrong-state' when it is closed already or is closed on a page of its own
 */
export async function finishTask(context: ServiceContext, { id, resolution }: { id: string, resolution: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const task = await trx.selectFrom('task').selectAll().where('id', '=', id).executeTakeFirst()
    const { userId, holdings } = context.actor
    const mine = task && (task.ownerId ? task.ownerId === userId : holdings.some(holding => (task.siteId === null || holding.siteId === task.siteId) && (!task.ownerRole || holding.role === task.ownerRole)))
    if (!task || !mine) throw new DomainError('not-found')
    if (task.kind === 'incident') throw new DomainError('wrong-state', { message: 'An incident is closed on its own page, when its record is complete.' })
    if (task.kind === 'recipient-reply') throw new DomainError('wrong-state', { message: 'What a recipient wrote is answered on the page of the report; the task is done with the answer.' })
    if (task.doneAt) throw new DomainError('wrong-state')
    await trx.updateTable('task').set({ doneAt: now(context), doneBy: userId, resolution }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'task.done', subject: 'task', subjectId: id, siteId: task.siteId, data: { kind: task.kind } })
  })
}
