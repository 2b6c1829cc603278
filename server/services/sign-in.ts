import type { User } from '#server/database/tables/user'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { actingAs, now, type ServiceContext } from './context'
import { deviceMarkName, makeDeviceMark, readDeviceMark } from './device-mark'
import { verifyPassword } from './passwords'
import { recordAuditEvent } from './record-audit-event'
import { useSecondFactor } from './second-factor'
import { createSession, endSession } from './sessions'
import { countAttempt, forgiveAttempt, type Attempt } from './sign-in-limits'

export interface SignInInput {
  email: string
  password: string
  /** Six digits, a recovery code, or ''. */
  code: string
  /** The caller's network address. */
  address: string
  agent: string
  /** Reads one device mark among the caller's cookies. */
  deviceMark: (name: string) => string | undefined
  /** A session that this browser had until now; it ends with the new sign-in. */
  previousSessionId: string | null
}
export interface SignedIn { userId: string, sessionId: string, device: { name: string, mark: string } }

/**
 * Checks e-mail address, password and second factor and opens a session. Whatever is wrong, text, status and the time
 * taken are the same, and the audit trail says which it was.
 * @throws DomainError 'sign-in-failed' · 'too-many-requests'
 */
export async function signIn(context: ServiceContext, input: SignInInput): Promise<SignedIn> {
  const user = await context.db.selectFrom('user').selectAll().where('email', '=', input.email.trim().toLowerCase()).executeTakeFirst()
  const attempt: Attempt = { address: input.address, account: context.keys.tokenHash(`account:${input.email.trim().toLowerCase()}`), device: user ? readDeviceMark(context, user.id, input.deviceMark(deviceMarkName(context, user.id))) : null }
  try {
    await countAttempt(context.db, attempt)
  }
  catch (error) {
    await recordLimit(context, user, input, error)
    throw error
  }
  const active = user && !user.deactivatedAt ? user : null
  const right = await verifyPassword(active?.passwordHash, input.password)
  if (!active || !right) return await refuse(context, user, input, !user ? 'no such account' : !active ? 'deactivated account' : 'wrong password')
  const { sessionId, because } = await openSession(context, active, input)
  if (!sessionId) return await refuse(context, user, input, because)
  await forgiveAttempt(context.db, attempt)
  return { userId: active.id, sessionId, device: { name: deviceMarkName(context, active.id), mark: makeDeviceMark(context, active.id) } }
}

/** Reads the account anew: whoever replaced password or factor while the old ones were checked ended every session. */
async function openSession(context: ServiceContext, checked: User, input: SignInInput): Promise<{ sessionId?: string, because: string }> {
  const acting = actingAs(context, { userId: checked.id, label: checked.name, holdings: [] })
  return await context.db.transaction().execute(async (trx) => {
    const user = await trx.selectFrom('user').selectAll().where('id', '=', checked.id).where('passwordHash', '=', checked.passwordHash).where('deactivatedAt', 'is', null).executeTakeFirst()
    if (!user) return { because: 'the account changed meanwhile' }
    const factor = user.totpEnabledAt ? await useSecondFactor(acting, trx, user, input.code) : 'none'
    if (factor === null) return { because: input.code ? 'wrong second factor' : 'second factor missing' }
    if (input.previousSessionId) await endSession(acting, trx, context.keys.tokenHash(input.previousSessionId), 'replaced by a new sign-in')
    const sessionId = await createSession(acting, trx, { userId: user.id, secondFactor: factor !== 'none', agent: input.agent })
    await trx.updateTable('user').set({ lastSeenAt: now(context) }).where('id', '=', user.id).execute()
    await recordAuditEvent(acting, trx, { name: 'session.signed-in', subject: 'user', subjectId: user.id, data: { secondFactor: factor !== 'none', recoveryCode: factor === 'recovery' } })
    return { sessionId, because: '' }
  })
}

async function refuse(context: ServiceContext, user: User | undefined, input: SignInInput, because: string): Promise<never> {
  await context.db.transaction().execute(trx => writeRefusal(context, trx, user, input, because))
  context.log.warn({ because: 'sign-in refused', userId: user?.id ?? null }, 'A sign-in was refused')
  throw new DomainError('sign-in-failed')
}

/** One entry per row of refusals: otherwise whoever hammers could fill the trail. */
async function recordLimit(context: ServiceContext, user: User | undefined, input: SignInInput, error: unknown): Promise<void> {
  const first = error instanceof DomainError && (error.options.details as { first?: boolean }).first === true
  if (first) await context.db.transaction().execute(trx => writeRefusal(context, trx, user, input, 'too many attempts; further ones are not listed until the wait is over'))
}

async function writeRefusal(context: ServiceContext, trx: Trx, user: User | undefined, input: SignInInput, because: string): Promise<void> {
  const acting = actingAs(context, { userId: null, label: 'nobody signed in', holdings: [] })
  await recordAuditEvent(acting, trx, { name: 'session.refused', subject: 'user', subjectId: user?.id ?? 'unknown', data: { because, address: input.address } })
}
