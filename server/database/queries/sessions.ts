import { compiled } from '#server/database/compiled'
import type { Database } from '#server/database/connection'

/**
 * One session with its person and every role holding, in one query: this runs at each request and is never cached,
 * so that an ended session, a deactivated person and a changed role take effect at the next request.
 */
export async function sessionWithHoldings(db: Database, idHash: string) {
  return await byHash(db, [idHash])
}

const byHash = compiled(db => db.selectFrom('session')
  .innerJoin('user', 'user.id', 'session.userId')
  .leftJoin('roleHolding', 'roleHolding.userId', 'user.id')
  .leftJoin('site', join => join.onRef('site.id', '=', 'roleHolding.siteId').on('site.closedAt', 'is', null))
  .where('session.idHash', '=', '')
  .where('session.endedAt', 'is', null)
  .where('user.deactivatedAt', 'is', null)
  .orderBy('site.name')
  .select(['session.lastUsedAt', 'session.expiresAt', 'session.createdAt', 'user.id', 'user.email', 'user.name', 'user.printedName', 'user.credentials', 'user.totpEnabledAt', 'user.emailConfirmedAt', 'user.inTraining',
    'roleHolding.role', 'roleHolding.startsOn', 'roleHolding.endsOn', 'site.id as siteId', 'site.name as siteName', 'site.town', 'site.timeZone'])
  .compile())
export type SessionRows = Awaited<ReturnType<typeof sessionWithHoldings>>
