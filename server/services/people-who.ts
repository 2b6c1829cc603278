import type { Trx } from '#server/database/connection'
import { roleMay, type Action } from '#shared/permissions'

/** Those who may do something at a site on a day, by name: a role in force there on that day. */
export async function peopleWho(db: Pick<Trx, 'selectFrom'>, action: Action, siteId: string, day: string): Promise<{ id: string, name: string }[]> {
  const rows = await db.selectFrom('roleHolding').innerJoin('user', 'user.id', 'roleHolding.userId').select(['user.id', 'user.name', 'role'])
    .where('siteId', '=', siteId).where('user.deactivatedAt', 'is', null).where('startsOn', '<=', day).where(eb => eb.or([eb('endsOn', 'is', null), eb('endsOn', '>', day)]))
    .orderBy('user.name').execute()
  return [...new Map(rows.filter(row => roleMay(row.role, action)).map(({ id, name }) => [id, { id, name }])).values()]
}
