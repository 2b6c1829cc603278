import { sql } from 'kysely'
import type { Database, Trx } from '#server/database/connection'
import type { Role } from '#shared/permissions'
import type { PageQuery } from '#shared/schemas/common'

/** Every role holding of these people at open sites, past and future ones too; services/current-holdings.ts keeps those that count today. */
export async function allHoldings(db: Database | Trx, personIds: readonly string[]) {
  if (personIds.length === 0) return []
  return await db.selectFrom('roleHolding').innerJoin('site', 'site.id', 'roleHolding.siteId').where('site.closedAt', 'is', null).where('roleHolding.userId', 'in', personIds)
    .select(['roleHolding.id', 'roleHolding.userId', 'roleHolding.siteId', 'site.name as siteName', 'site.timeZone', 'roleHolding.role', 'roleHolding.startsOn', 'roleHolding.endsOn'])
    .orderBy('site.name').orderBy('roleHolding.role').execute()
}

/** True for whoever holds, held or will hold one of these roles, at whatever site. */
export async function everHeld(trx: Trx, personId: string, roles: readonly Role[]): Promise<boolean> {
  return await trx.selectFrom('roleHolding').select('id').where('userId', '=', personId).where('role', 'in', roles).executeTakeFirst() !== undefined
}

/** People who ever held a role at one of the sites, and people without any role (just added). */
function peopleAt(db: Database, sites: readonly string[], search: string) {
  const words = `%${search.trim().replace(/[\\%_]/g, match => `\\${match}`)}%`
  return db.selectFrom('user')
    .where(eb => eb.or([
      eb.exists(eb.selectFrom('roleHolding').select(sql`1`.as('one')).whereRef('roleHolding.userId', '=', 'user.id').where('roleHolding.siteId', 'in', sites)),
      eb.not(eb.exists(eb.selectFrom('roleHolding').select(sql`1`.as('one')).whereRef('roleHolding.userId', '=', 'user.id'))),
    ]))
    .$if(search.trim() !== '', query => query.where(sql<boolean>`(name like ${words} escape '\\' or email like ${words} escape '\\')`))
}

export async function listPeople(db: Database, sites: readonly string[], query: PageQuery) {
  const { total } = await peopleAt(db, sites, query.search).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const column = query.sort === 'lastSeenAt' ? 'lastSeenAt' : query.sort === 'email' ? 'email' : 'name'
  const rows = await peopleAt(db, sites, query.search)
    .select(['user.id', 'email', 'name', 'printedName', 'credentials', 'inTraining', 'totpEnabledAt', 'emailConfirmedAt', 'lastSeenAt', 'deactivatedAt', sql<number>`password_hash is not null`.as('hasPassword')])
    .orderBy(column, query.direction).orderBy('user.id').limit(query.pageSize).offset((query.page - 1) * query.pageSize).execute()
  return { total, rows }
}

/** One person, if the asker's sites let them be seen. */
export async function findPerson(db: Database, sites: readonly string[], id: string) {
  return await peopleAt(db, sites, '').where('user.id', '=', id)
    .select(['user.id', 'email', 'name', 'printedName', 'credentials', 'inTraining', 'totpEnabledAt', 'emailConfirmedAt', 'lastSeenAt', 'deactivatedAt', sql<number>`password_hash is not null`.as('hasPassword')]).executeTakeFirst()
}
