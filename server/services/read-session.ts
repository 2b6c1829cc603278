import { sessionWithHoldings, type SessionRows } from '#server/database/queries/sessions'
import { rolesWithSecondFactor, type Role } from '#shared/permissions'
import type { SessionUser } from '#shared/schemas/user'
import { now, type Actor, type ServiceContext } from './context'
import { localDate } from './site-time'

export interface OpenSession { idHash: string, user: SessionUser }

const MINUTE_MS = 60_000
/** A use is written at most this often, so that a request rarely costs a disk write; the idle limit is early by as much. */
export const WRITE_USE_AFTER_MS = 30_000

/**
 * The person behind a session id, with the roles in force today at each site.
 * @param background true for polling and streams: they do not keep an unattended workstation signed in
 * @returns null when the session does not exist, was ended, sat idle too long or is older than its absolute limit
 */
export async function readSession(context: ServiceContext, sessionId: string, background = false): Promise<OpenSession | null> {
  const idHash = context.keys.tokenHash(sessionId)
  const rows = await sessionWithHoldings(context.db, idHash)
  const [row] = rows
  if (!row) return null
  const at = now(context)
  const idleSince = context.clock().getTime() - Date.parse(row.lastUsedAt)
  if (at >= row.expiresAt || idleSince >= context.settings.idleMinutes * MINUTE_MS) {
    await endExpired(context, idHash, at >= row.expiresAt ? 'after 12 hours' : 'idle')
    return null
  }
  if (!background && idleSince >= WRITE_USE_AFTER_MS) {
    await context.db.updateTable('session').set({ lastUsedAt: at }).where('idHash', '=', idHash).where('endedAt', 'is', null).execute()
  }
  return { idHash, user: sessionUserOf(context, rows) }
}

async function endExpired(context: ServiceContext, idHash: string, because: string): Promise<void> {
  await context.db.updateTable('session').set({ endedAt: now(context), endedBecause: because }).where('idHash', '=', idHash).where('endedAt', 'is', null).execute()
}

function sessionUserOf(context: ServiceContext, rows: SessionRows): SessionUser {
  const first = rows[0]!
  const holdings = rows.flatMap(row => inForce(row, context.clock()) ? [{ siteId: row.siteId!, siteName: row.siteName!, role: row.role! as Role }] : [])
  const sites = new Map(rows.filter(row => holdings.some(holding => holding.siteId === row.siteId)).map(row => [row.siteId!, { id: row.siteId!, name: row.siteName!, town: row.town!, timeZone: row.timeZone! }]))
  const secondFactor = first.totpEnabledAt !== null
  return {
    id: first.id, email: first.email, name: first.name, printedName: first.printedName, credentials: first.credentials, emailConfirmed: first.emailConfirmedAt !== null,
    holdings, sites: [...sites.values()], secondFactor, inTraining: first.inTraining === 1,
    mustEnrol: !secondFactor && holdings.some(holding => rolesWithSecondFactor.includes(holding.role)),
    demonstration: context.settings.demonstration, idleMinutes: context.settings.idleMinutes, openTasks: 0, changesUpTo: 0,
  }
}

/** `endsOn` is the first day without the role, at the site: a role ended today is gone at the next request. */
export function inForce(holding: { siteId: string | null, timeZone: string | null, startsOn: string | null, endsOn: string | null }, instant: Date): boolean {
  if (!holding.siteId || !holding.timeZone || !holding.startsOn) return false
  const today = localDate(instant, holding.timeZone)
  return holding.startsOn <= today && (holding.endsOn === null || today < holding.endsOn)
}

export function actorOf(user: SessionUser): Actor {
  return { userId: user.id, label: user.name, holdings: user.holdings, inTraining: user.inTraining }
}
