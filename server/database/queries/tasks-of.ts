import type { Database } from '#server/database/connection'

/** How many open tasks wait for this person: own ones, and those of a role held at the task's site, or anywhere where the task has none. */
export async function countOpenTasks(db: Database, userId: string, holdings: readonly { siteId: string, role: string }[]): Promise<number> {
  const row = await db.selectFrom('task').where('doneAt', 'is', null)
    .where(eb => eb.or([
      eb('ownerId', '=', userId),
      ...holdings.map(holding => eb.and([eb('ownerId', 'is', null), eb.or([eb('siteId', 'is', null), eb('siteId', '=', holding.siteId)]), eb.or([eb('ownerRole', 'is', null), eb('ownerRole', '=', holding.role)])])),
    ]))
    .select(eb => eb.fn.countAll<number>().as('count')).executeTakeFirstOrThrow()
  return row.count
}
