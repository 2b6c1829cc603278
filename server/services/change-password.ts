import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { changedValues } from './changed-fields'
import type { ServiceContext } from './context'
import { ownWords } from './own-words'
import { complaintAbout, hashPassword } from './passwords'
import { recordAuditEvent } from './record-audit-event'
import { createSession, endSession, endSessions } from './sessions'
import { verifyOwnPassword } from './verify-own-password'

export interface PasswordChange { userId: string, currentPassword: string, newPassword: string, endOtherSessions: boolean, sessionHash: string, agent: string }

/**
 * Changes the own password. The session gets a new id, and the others end unless the person wants to keep them.
 * @returns the id of the new session, for the cookie
 * @throws DomainError 'wrong-password' · 'not-valid' with what speaks against the new one · 'too-many-requests'
 */
export async function changePassword(context: ServiceContext, change: PasswordChange): Promise<string> {
  if (!await verifyOwnPassword(context, change.userId, change.currentPassword)) throw new DomainError('wrong-password', { message: 'The present password is not right. Nothing was changed.', fields: [{ path: 'currentPassword', message: 'The present password is not right.' }] })
  const passwordHash = await hashNewPassword(context, change.userId, change.newPassword, 'newPassword')
  return await context.db.transaction().execute(async (trx) => {
    await trx.updateTable('user').set({ passwordHash }).where('id', '=', change.userId).execute()
    await recordAuditEvent(context, trx, { name: 'account.password-set', subject: 'user', subjectId: change.userId, data: { by: 'self' } })
    if (change.endOtherSessions) await endSessions(context, trx, { userId: change.userId, because: 'password changed', exceptHash: change.sessionHash })
    return await renewSession(context, trx, change)
  })
}

/** A new id for the present session, the old one ends: after the password was proved again. */
export async function renewSession(context: ServiceContext, trx: Trx, session: { userId: string, sessionHash: string, agent: string }): Promise<string> {
  const old = await trx.selectFrom('session').select('secondFactor').where('idHash', '=', session.sessionHash).executeTakeFirst()
  await endSession(context, trx, session.sessionHash, 'renewed')
  return await createSession(context, trx, { userId: session.userId, secondFactor: old?.secondFactor === 1, agent: session.agent })
}

/**
 * @param alone true when the second factor goes away with this change: the longer password is then asked for
 * @throws DomainError 'not-valid' with the complaint under `path`
 */
export async function hashNewPassword(context: ServiceContext, userId: string, password: string, path: string, alone = false): Promise<string> {
  const user = await context.db.selectFrom('user').select(['name', 'email', 'totpEnabledAt']).where('id', '=', userId).executeTakeFirstOrThrow()
  const complaint = complaintAbout(password, { secondFactor: user.totpEnabledAt !== null && !alone, ownWords: await ownWords(context.db, user) })
  if (complaint) throw new DomainError('not-valid', { fields: [{ path, message: complaint }] })
  return await hashPassword(password)
}

/** Ends every session of the person, the present one too. */
export async function signOutEverywhere(context: ServiceContext, userId: string): Promise<number> {
  return await context.db.transaction().execute(trx => endSessions(context, trx, { userId, because: 'signed out everywhere' }))
}

/** Name and credentials as reports print them. */
export async function changeProfile(context: ServiceContext, userId: string, changes: { printedName?: string, credentials?: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const old = await trx.selectFrom('user').select(['printedName', 'credentials']).where('id', '=', userId).executeTakeFirstOrThrow()
    const changed = changedValues(old, changes)
    if (changed.length === 0) return
    await trx.updateTable('user').set(Object.fromEntries(changed.map(change => [change.field, change.after]))).where('id', '=', userId).execute()
    await recordAuditEvent(context, trx, { name: 'account.profile-changed', subject: 'user', subjectId: userId, data: { changes: changed } })
  })
}
