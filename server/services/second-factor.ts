import { randomBytes, randomUUID } from 'node:crypto'
import { Secret, TOTP } from 'otpauth'
import QRCode from 'qrcode'
import type { Trx } from '#server/database/connection'
import type { User } from '#server/database/tables/user'
import { DomainError } from '#shared/errors'
import type { TotpStart } from '#shared/schemas/user'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { createSession, endSessions } from './sessions'
import { countOwnCode, forgiveOwnCodes } from './sign-in-limits'
import { verifyOwnPassword } from './verify-own-password'

const PENDING = 'totp-pending'
const PENDING_MS = 10 * 60_000
const STEP_SECONDS = 30
/** One step before and after: clocks of telephones drift. RFC 6238, section 5.2 (from memory). */
const WINDOW = 1
const RECOVERY_CODES = 10
/** Without I, O, 0, 1, 8 and 9: nothing that is read as something else. */
const RECOVERY_ALPHABET = 'ABCDEFGHJKLMNPQRSTUVWXYZ234567'

/** SHA-1, six digits, 30 seconds: what every authenticator understands; HMAC does not need collision resistance. */
function totpOf(secret: Secret, label: string): TOTP {
  return new TOTP({ issuer: 'Orthodrome', label, secret, algorithm: 'SHA1', digits: 6, period: STEP_SECONDS })
}

/** The time step whose code this is, or null. */
function stepOf(context: ServiceContext, secretBase32: string, code: string): number | null {
  const timestamp = context.clock().getTime()
  const delta = totpOf(Secret.fromBase32(secretBase32), '').validate({ token: code.replace(/\s/g, ''), timestamp, window: WINDOW })
  return delta === null ? null : Math.floor(timestamp / 1000 / STEP_SECONDS) + delta
}

/** A new secret of 160 bits, kept sealed for ten minutes until a code of it comes back. What was set up before goes on until then. */
export async function startSecondFactor(context: ServiceContext, user: { id: string, email: string }): Promise<TotpStart> {
  const secret = new Secret({ size: 20 })
  const uri = totpOf(secret, user.email).toString()
  await context.db.transaction().execute(async (trx) => {
    await trx.deleteFrom('oneTimeLink').where('purpose', '=', PENDING).where('userId', '=', user.id).execute()
    await trx.insertInto('oneTimeLink').values({
      tokenHash: context.keys.tokenHash(`${PENDING}:${randomUUID()}`), purpose: PENDING, userId: user.id, dataJson: JSON.stringify({ sealed: context.keys.seal(secret.base32) }),
      createdAt: now(context), expiresAt: new Date(context.clock().getTime() + PENDING_MS).toISOString(), usedAt: null,
    }).execute()
  })
  const qrSvg = await QRCode.toString(uri, { type: 'svg', margin: 2, errorCorrectionLevel: 'M' })
  return { secret: secret.base32, uri, qrSvg }
}

/**
 * Sets the second factor once a code of the new secret, the password and (where one exists) a code of the old factor are
 * right. Every session ends and the present one goes on under a new id.
 * @returns ten recovery codes, shown this once (only their hashes are stored), and the new session's id for the cookie
 * @throws DomainError 'wrong-password' · 'not-valid' for a wrong code · 'link-used' when ten minutes have passed ·
 * 'too-many-requests' after ten wrong codes in 15 minutes
 */
export async function confirmSecondFactor(context: ServiceContext, input: { userId: string, password: string, code: string, currentCode: string, agent: string }): Promise<{ recoveryCodes: string[], sessionId: string }> {
  if (!await verifyOwnPassword(context, input.userId, input.password)) throw new DomainError('wrong-password', { message: 'The password is not right. Nothing was changed.', fields: [{ path: 'password', message: 'The password is not right.' }] })
  await countOwnCode(context.db, input.userId)
  const codes = Array.from({ length: RECOVERY_CODES }, makeRecoveryCode)
  const sessionId = await context.db.transaction().execute(async (trx) => {
    const user = await trx.selectFrom('user').selectAll().where('id', '=', input.userId).executeTakeFirstOrThrow()
    const replaced = user.totpEnabledAt !== null
    if (replaced && await useSecondFactor(context, trx, user, input.currentCode) === null) throw wrongCode('currentCode')
    const { secret, step } = await takePending(context, trx, input)
    await trx.updateTable('user').set({ totpSecretSealed: context.keys.seal(secret), totpEnabledAt: now(context), totpLastStep: step }).where('id', '=', input.userId).execute()
    await replaceRecoveryCodes(context, trx, input.userId, codes)
    await recordAuditEvent(context, trx, { name: 'account.second-factor-set', subject: 'user', subjectId: input.userId, data: { replaced } })
    await endSessions(context, trx, { userId: input.userId, because: 'second factor set' })
    return await createSession(context, trx, { userId: input.userId, secondFactor: true, agent: input.agent })
  })
  await forgiveOwnCodes(context.db, input.userId)
  return { recoveryCodes: codes, sessionId }
}

function wrongCode(path: string): DomainError {
  return new DomainError('not-valid', { fields: [{ path, message: 'The code is not right or was used before. Wait for the next one.' }] })
}

async function takePending(context: ServiceContext, trx: Trx, input: { userId: string, code: string }): Promise<{ secret: string, step: number }> {
  const pending = await trx.selectFrom('oneTimeLink').selectAll().where('purpose', '=', PENDING).where('userId', '=', input.userId).where('expiresAt', '>', now(context)).executeTakeFirst()
  if (!pending) throw new DomainError('link-used', { message: 'The picture is older than ten minutes. Start again.' })
  const secret = context.keys.unseal((JSON.parse(pending.dataJson) as { sealed: string }).sealed)
  const step = stepOf(context, secret, input.code)
  if (step === null) throw wrongCode('code')
  await trx.deleteFrom('oneTimeLink').where('tokenHash', '=', pending.tokenHash).execute()
  return { secret, step }
}

async function replaceRecoveryCodes(context: ServiceContext, trx: Trx, userId: string, codes: readonly string[]): Promise<void> {
  await trx.deleteFrom('recoveryCode').where('userId', '=', userId).execute()
  await trx.insertInto('recoveryCode').values(codes.map(code => ({ id: randomUUID(), userId, codeHash: recoveryHash(context, userId, code), createdAt: now(context), usedAt: null }))).execute()
}

/** 16 characters out of 30: 78 bits, in four groups. */
function makeRecoveryCode(): string {
  const pick = () => {
    for (;;) {
      const byte = randomBytes(1)[0]!
      if (byte < 256 - 256 % RECOVERY_ALPHABET.length) return RECOVERY_ALPHABET[byte % RECOVERY_ALPHABET.length]!
    }
  }
  return Array.from({ length: 4 }, () => Array.from({ length: 4 }, pick).join('')).join('-')
}

function recoveryHash(context: ServiceContext, userId: string, code: string): string {
  return context.keys.tokenHash(`recovery:${userId}:${code.toUpperCase().replace(/[^A-Z2-7]/g, '')}`)
}

/**
 * Uses up a code of the second factor, inside the caller's transaction: each time step and each recovery code counts once.
 * @returns which kind it was, or null when it is wrong or was used before
 */
export async function useSecondFactor(context: ServiceContext, trx: Trx, user: Pick<User, 'id' | 'totpSecretSealed'>, code: string): Promise<'totp' | 'recovery' | null> {
  if (/^\d{3}\s?\d{3}$/.test(code.trim())) return await useTotp(context, trx, user, code) ? 'totp' : null
  const used = await trx.updateTable('recoveryCode').set({ usedAt: now(context) })
    .where('userId', '=', user.id).where('codeHash', '=', recoveryHash(context, user.id, code)).where('usedAt', 'is', null).executeTakeFirst()
  return used.numUpdatedRows === 1n ? 'recovery' : null
}

async function useTotp(context: ServiceContext, trx: Trx, user: Pick<User, 'id' | 'totpSecretSealed'>, code: string): Promise<boolean> {
  if (!user.totpSecretSealed) return false
  const step = stepOf(context, context.keys.unseal(user.totpSecretSealed), code)
  if (step === null) return false
  const moved = await trx.updateTable('user').set({ totpLastStep: step }).where('id', '=', user.id)
    .where(eb => eb.or([eb('totpLastStep', 'is', null), eb('totpLastStep', '<', step)])).executeTakeFirst()
  return moved.numUpdatedRows === 1n
}
