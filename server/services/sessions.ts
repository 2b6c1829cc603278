import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { SessionRow } from '#shared/schemas/user'
import { now, type ServiceContext } from './context'
import { newToken } from './keys'
import { recordAuditEvent } from './record-audit-event'

/** A session ends 12 hours after sign-in whatever happens: one working day at a shared workstation. */
export const ABSOLUTE_MS = 12 * 3_600_000

/**
 * A new session row. The id goes into the cookie; the row holds its hash only.
 * @param agent the browser as it calls itself, so that people can tell their own sessions apart
 */
export async function createSession(context: ServiceContext, trx: Trx, session: { userId: string, secondFactor: boolean, agent: string }): Promise<string> {
  const id = newToken()
  const at = now(context)
  await trx.insertInto('session').values({
    idHash: context.keys.tokenHash(id), userId: session.userId, createdAt: at, lastUsedAt: at,
    expiresAt: new Date(context.clock().getTime() + ABSOLUTE_MS).toISOString(),
    secondFactor: session.secondFactor ? 1 : 0, agent: plainAgent(session.agent), endedAt: null, endedBecause: null,
  }).execute()
  return id
}

/** @example plainAgent('Mozilla/5.0 (X11; Linux x86_64) … Firefox/140.0') // => 'Firefox on Linux' */
export function plainAgent(agent: string): string {
  const browser = [['Edg/', 'Edge'], ['Firefox/', 'Firefox'], ['Chrome/', 'Chrome'], ['Safari/', 'Safari']].find(([mark]) => agent.includes(mark!))?.[1] ?? 'a browser'
  const system = [['Windows', 'Windows'], ['Android', 'Android'], ['iPhone', 'iPhone'], ['iPad', 'iPad'], ['Mac OS', 'macOS'], ['Linux', 'Linux']].find(([mark]) => agent.includes(mark!))?.[1]
  return system ? `${browser} on ${system}` : browser
}

/** Ends the sessions of one person, all or all but one; says how many ended. */
export async function endSessions(context: ServiceContext, trx: Trx, ending: { userId: string, because: string, exceptHash?: string }): Promise<number> {
  const result = await trx.updateTable('session').set({ endedAt: now(context), endedBecause: ending.because })
    .where('userId', '=', ending.userId).where('endedAt', 'is', null).where('idHash', '!=', ending.exceptHash ?? '').executeTakeFirst()
  const count = Number(result.numUpdatedRows)
  if (count > 0) await recordAuditEvent(context, trx, { name: 'session.ended', subject: 'user', subjectId: ending.userId, data: { because: ending.because, count } })
  return count
}

/** Ends one session, if it is still open; signing out twice does no harm. */
export async function endSession(context: ServiceContext, trx: Trx, idHash: string, because: string): Promise<boolean> {
  const row = await trx.updateTable('session').set({ endedAt: now(context), endedBecause: because })
    .where('idHash', '=', idHash).where('endedAt', 'is', null).returning('userId').executeTakeFirst()
  if (!row) return false
  await recordAuditEvent(context, trx, { name: 'session.ended', subject: 'user', subjectId: row.userId, data: { because, count: 1 } })
  return true
}

/** Signs out: the row ends, so that a copy of the cookie is worth nothing. */
export async function signOut(context: ServiceContext, sessionId: string): Promise<void> {
  const idHash = context.keys.tokenHash(sessionId)
  const owner = await context.db.selectFrom('session').innerJoin('user', 'user.id', 'session.userId').where('session.idHash', '=', idHash).select(['user.id', 'user.name']).executeTakeFirst()
  if (!owner) return
  const acting = { ...context, actor: { userId: owner.id, label: owner.name, holdings: [] } }
  await context.db.transaction().execute(trx => endSession(acting, trx, idHash, 'signed out'))
}

/** The open sessions of one person. The id given out is a part of the row's hash: enough to name it, no use for signing in. */
export async function listSessions(context: ServiceContext, userId: string, currentHash: string): Promise<SessionRow[]> {
  const idleSince = new Date(context.clock().getTime() - context.settings.idleMinutes * 60_000).toISOString()
  const rows = await context.db.selectFrom('session').select(['idHash', 'createdAt', 'lastUsedAt', 'agent'])
    .where('userId', '=', userId).where('endedAt', 'is', null).where('expiresAt', '>', now(context)).where('lastUsedAt', '>', idleSince).orderBy('lastUsedAt', 'desc').execute()
  return rows.map(({ idHash, ...row }) => ({ id: publicSessionId(idHash), ...row, current: idHash === currentHash }))
}

export function publicSessionId(idHash: string): string {
  return idHash.slice(0, 24)
}

/** @throws DomainError 'not-found' when the person has no such open session */
export async function endOwnSession(context: ServiceContext, userId: string, publicId: string): Promise<void> {
  const open = await context.db.selectFrom('session').select('idHash').where('userId', '=', userId).where('endedAt', 'is', null).execute()
  const found = open.find(session => publicSessionId(session.idHash) === publicId)
  if (!found) throw new DomainError('not-found')
  await context.db.transaction().execute(trx => endSession(context, trx, found.idHash, 'ended by its owner'))
}
