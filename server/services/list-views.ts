import { randomUUID } from 'node:crypto'
import { DomainError } from '#shared/errors'
import type { ListViewInput, ListViewRow } from '#shared/schemas/list-view'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

const MOST = 30

function ownId(context: ServiceContext): string {
  if (!context.actor.userId) throw new DomainError('not-signed-in')
  return context.actor.userId
}

/** The views that this person saved of a list, by name. */
export async function listViews(context: ServiceContext, room: string): Promise<ListViewRow[]> {
  return await context.db.selectFrom('listView').select(['id', 'name', 'query']).where('userId', '=', ownId(context)).where('room', '=', room).orderBy('name').execute()
}

/** Saves a view under a name; the same name again replaces it. @throws DomainError 'not-valid' when there are too many */
export async function saveListView(context: ServiceContext, { room, name, query }: ListViewInput): Promise<ListViewRow[]> {
  const userId = ownId(context)
  await context.db.transaction().execute(async (trx) => {
    const { count } = await trx.selectFrom('listView').select(eb => eb.fn.countAll<number>().as('count')).where('userId', '=', userId).where('room', '=', room).where('name', '<>', name).executeTakeFirstOrThrow()
    if (count >= MOST) throw new DomainError('not-valid', { fields: [{ path: 'name', message: `You have ${MOST} views of this list. Remove one first.` }] })
    const { id } = await trx.insertInto('listView').values({ id: randomUUID(), userId, room, name, query, createdAt: now(context) }).onConflict(conflict => conflict.columns(['userId', 'room', 'name']).doUpdateSet({ query })).returning('id').executeTakeFirstOrThrow()
    await recordAuditEvent(context, trx, { name: 'list-view.saved', subject: 'list-view', subjectId: id, data: { room } })
  })
  return await listViews(context, room)
}

/** @throws DomainError 'not-found' for a view of somebody else */
export async function removeListView(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const gone = await trx.deleteFrom('listView').where('id', '=', id).where('userId', '=', ownId(context)).returning('room').executeTakeFirst()
    if (!gone) throw new DomainError('not-found')
    await recordAuditEvent(context, trx, { name: 'list-view.removed', subject: 'list-view', subjectId: id, data: { room: gone.room } })
  })
}
