import { randomInt } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { endLinks } from './account-links'
import { now, type ServiceContext } from './context'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'
import { endSessions } from './sessions'
import { verifyOwnPassword } from './verify-own-password'

const PURPOSE = 'confirm-address'
const HOURS = 2
const MOST_TRIES = 5
/** Letters and digits that are not taken for each other when they are typed. */
const ALPHABET = 'ABCDEFGHJKMNPQRSTUVWXYZ23456789'
interface CodeData { email: string, tries: number }

const hashOf = (context: ServiceContext, userId: string, code: string) => context.keys.tokenHash(`${PURPOSE}/${userId}/${code.toUpperCase().replace(/[^A-Z0-9]/g, '')}`)

/**
 * Mails a code to the address that a signed-in person calls the own: the present one, to prove it, or a new one, which
 * counts only once the code comes back.
 * @throws DomainError 'wrong-password' · 'not-valid' when another account has the address · 'too-many-requests'
 */
export async function sendOwnAddressCode(context: ServiceContext, { userId, email, password }: { userId: string, email: string, password: string }): Promise<void> {
  if (!await verifyOwnPassword(context, userId, password)) throw new DomainError('wrong-password', { message: 'The password is not right. Nothing was changed.', fields: [{ path: 'password', message: 'The password is not right.' }] })
  const code = Array.from({ length: 10 }, () => ALPHABET[randomInt(ALPHABET.length)]).join('')
  await context.db.transaction().execute(async (trx) => {
    await checkFree(trx, userId, email)
    await trx.deleteFrom('oneTimeLink').where('purpose', '=', PURPOSE).where('userId', '=', userId).where('usedAt', 'is', null).execute()
    const data: CodeData = { email: email.toLowerCase(), tries: 0 }
    await trx.insertInto('oneTimeLink').values({ tokenHash: hashOf(context, userId, code), purpose: PURPOSE, userId, dataJson: JSON.stringify(data), createdAt: now(context), expiresAt: new Date(context.clock().getTime() + HOURS * 3_600_000).toISOString(), usedAt: null }).execute()
    const organisation = await trx.selectFrom('organisation').select('name').executeTakeFirstOrThrow()
    await queueMail(context, trx, { template: 'confirm-address', toAddress: data.email, data: { code: `${code.slice(0, 5)}-${code.slice(5)}`, hours: HOURS, organisation: organisation.name } })
    await recordAuditEvent(context, trx, { name: 'account.address-code-sent', subject: 'user', subjectId: userId, data: {} })
  })
}

async function checkFree(trx: Trx, userId: string, email: string): Promise<void> {
  const other = await trx.selectFrom('user').select('id').where('email', '=', email.toLowerCase()).where('id', '<>', userId).executeTakeFirst()
  if (other) throw new DomainError('not-valid', { fields: [{ path: 'email', message: 'Another account has this e-mail address.' }] })
}

/**
 * Takes the code from the mail: the address is confirmed, and a new one counts from now on.
 * @returns whether the address changed
 * @throws DomainError 'not-valid' for a wrong, old or used-up code
 */
export async function confirmOwnAddress(context: ServiceContext, { userId, code, sessionHash }: { userId: string, code: string, sessionHash: string }): Promise<{ changed: boolean }> {
  const result = await context.db.transaction().execute(async (trx) => {
    const link = await trx.selectFrom('oneTimeLink').selectAll().where('purpose', '=', PURPOSE).where('userId', '=', userId).where('usedAt', 'is', null).where('expiresAt', '>', now(context)).executeTakeFirst()
    const data = link && JSON.parse(link.dataJson) as CodeData
    if (!link || !data || data.tries >= MOST_TRIES) return 'none'
    if (link.tokenHash !== hashOf(context, userId, code)) {
      await trx.updateTable('oneTimeLink').set({ dataJson: JSON.stringify({ ...data, tries: data.tries + 1 }) }).where('tokenHash', '=', link.tokenHash).execute()
      return 'wrong'
    }
    return { changed: await takeAddress(context, trx, userId, data.email, sessionHash) }
  })
  if (typeof result !== 'string') return result
  throw new DomainError('not-valid', { fields: [{ path: 'code', message: result === 'none' ? 'No code is on its way, or it is worth nothing any more. Ask for a new one.' : 'This is not the code that was mailed. Look again.' }] })
}

async function takeAddress(context: ServiceContext, trx: Trx, userId: string, email: string, sessionHash: string): Promise<boolean> {
  await checkFree(trx, userId, email)
  const before = await trx.selectFrom('user').select('email').where('id', '=', userId).executeTakeFirstOrThrow()
  const changed = before.email !== email
  await trx.updateTable('user').set({ email, emailConfirmedAt: now(context) }).where('id', '=', userId).execute()
  await endLinks(trx, userId)
  await recordAuditEvent(context, trx, { name: 'account.address-confirmed', subject: 'user', subjectId: userId, data: { by: 'code', changed } })
  if (changed) {
    await recordAuditEvent(context, trx, { name: 'account.profile-changed', subject: 'user', subjectId: userId, data: { changes: [{ field: 'email', before: before.email, after: email }] } })
    await endSessions(context, trx, { userId, because: 'e-mail address changed', exceptHash: sessionHash })
  }
  return changed
}
