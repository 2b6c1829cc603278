import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

/**
 * Makes a task one's own, or takes it over from a colleague of the same role.
 * @throws DomainError 'not-found' when it is nothing for them, 'wrong-state' when it is done
 */
export async function takeTask(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const task = await trx.selectFrom('task').selectAll().where('id', '=', id).executeTakeFirst()
    const { userId, holdings } = context.actor
    const fits = task && userId && holdings.some(holding => (task.siteId === null || holding.siteId === task.siteId) && holding.role === task.ownerRole)
    if (!fits) throw new DomainError('not-found')
    if (task.doneAt) throw new DomainError('wrong-state', { message: 'This was done meanwhile.' })
    if (task.ownerId === userId) return
    await trx.updateTable('task').set({ ownerId: userId }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'task.taken', subject: 'task', subjectId: id, siteId: task.siteId, data: { kind: task.kind, from: task.ownerId } })
  })
}
