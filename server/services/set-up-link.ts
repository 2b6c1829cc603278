import type { Trx } from '#server/database/connection'
import { everHeld } from '#server/database/queries/people'
import type { User } from '#server/database/tables/user'
import { DomainError } from '#shared/errors'
import { rolesWithSecondFactor } from '#shared/permissions'
import type { SetUpLinkAnswer } from '#shared/schemas/user'
import { now, systemActor, type ServiceContext } from './context'
import { currentHoldings } from './current-holdings'
import { hashNewPassword } from './change-password'
import { newToken } from './keys'
import { checkMayWriteEverywhere } from './people-rules'
import { recordAuditEvent } from './record-audit-event'
import { endSessions } from './sessions'

const LINK = 'set-password'
const ASKED = 'set-password-asked'
const DAY_MS = 86_400_000
interface LinkData { resetSecondFactor: boolean, askedBy: string | null }

/**
 * Makes a one-time link (24 hours) with which a person sets the own password; whoever makes it learns no password. For a
 * signer who has one already two different people have to ask within 24 hours: otherwise one administrator alone could
 * sign as a doctor. A signer is whoever ever was one, since a role can be ended before and given back afterwards. The
 * second factor stays unless both asked to reset it.
 * @throws DomainError 'not-allowed' when the asker does not administer every site of the person
 */
export async function makeSetUpLink(context: ServiceContext, personId: string, resetSecondFactor: boolean): Promise<SetUpLinkAnswer> {
  return await context.db.transaction().execute(async (trx) => {
    const person = await trx.selectFrom('user').selectAll().where('id', '=', personId).where('deactivatedAt', 'is', null).executeTakeFirst()
    if (!person) throw new DomainError('not-found')
    const holdings = await currentHoldings(trx, [personId], context.clock())
    const isSigner = await everHeld(trx, personId, rolesWithSecondFactor)
    checkMayWriteEverywhere(context.actor, holdings, isSigner ? 'people.read' : 'people.write')
    const needsTwo = isSigner && isSetUp(person)
    const askedBy = needsTwo ? await otherWhoAsked(context, trx, personId, resetSecondFactor) : null
    if (needsTwo && !askedBy) return await noteAsking(context, trx, personId, resetSecondFactor)
    return await writeLink(context, trx, personId, { resetSecondFactor, askedBy })
  })
}

const isSetUp = (person: Pick<User, 'passwordHash' | 'totpEnabledAt'>) => person.passwordHash !== null || person.totpEnabledAt !== null

async function otherWhoAsked(context: ServiceContext, trx: Trx, personId: string, resetSecondFactor: boolean): Promise<string | null> {
  const rows = await trx.selectFrom('oneTimeLink').select('dataJson').where('purpose', '=', ASKED).where('userId', '=', personId).where('expiresAt', '>', now(context)).execute()
  const askings = rows.map(row => JSON.parse(row.dataJson) as LinkData)
  return askings.find(asking => asking.askedBy !== context.actor.userId && asking.askedBy !== personId && asking.resetSecondFactor === resetSecondFactor)?.askedBy ?? null
}

async function noteAsking(context: ServiceContext, trx: Trx, personId: string, resetSecondFactor: boolean): Promise<SetUpLinkAnswer> {
  await insertLink(context, trx, { purpose: ASKED, personId, token: newToken(), data: { resetSecondFactor, askedBy: context.actor.userId } })
  await recordAuditEvent(context, trx, { name: 'account.link-asked', subject: 'user', subjectId: personId, data: {} })
  return { waiting: true }
}

async function writeLink(context: ServiceContext, trx: Trx, personId: string, data: LinkData): Promise<SetUpLinkAnswer> {
  await trx.deleteFrom('oneTimeLink').where('purpose', 'in', [LINK, ASKED]).where('userId', '=', personId).where('usedAt', 'is', null).execute()
  const token = newToken()
  const expiresAt = await insertLink(context, trx, { purpose: LINK, personId, token, data })
  await recordAuditEvent(context, trx, { name: 'account.link-made', subject: 'user', subjectId: personId, data: { askedBy: data.askedBy } })
  return { waiting: false, link: `${new URL(context.settings.appOrigin).origin}/set-password#${token}`, expiresAt }
}

async function insertLink(context: ServiceContext, trx: Trx, link: { purpose: string, personId: string, token: string, data: LinkData }): Promise<string> {
  const expiresAt = new Date(context.clock().getTime() + DAY_MS).toISOString()
  await trx.insertInto('oneTimeLink').values({ tokenHash: context.keys.tokenHash(link.token), purpose: link.purpose, userId: link.personId, dataJson: JSON.stringify(link.data), createdAt: now(context), expiresAt, usedAt: null }).execute()
  return expiresAt
}

/**
 * Sets a password through a one-time link and ends every session of that person.
 * @throws DomainError 'link-used' · 'not-valid'
 */
export async function setPassword(context: ServiceContext, input: { token: string, password: string }): Promise<void> {
  const tokenHash = context.keys.tokenHash(input.token)
  const link = await context.db.selectFrom('oneTimeLink').innerJoin('user', 'user.id', 'oneTimeLink.userId').selectAll('oneTimeLink').select('user.name')
    .where('tokenHash', '=', tokenHash).where('purpose', '=', LINK).where('usedAt', 'is', null).where('expiresAt', '>', now(context)).where('user.deactivatedAt', 'is', null).executeTakeFirst()
  if (!link?.userId) throw new DomainError('link-used')
  const { resetSecondFactor, askedBy } = JSON.parse(link.dataJson) as LinkData
  const userId = link.userId
  const passwordHash = await hashNewPassword(context, userId, input.password, 'password', resetSecondFactor)
  const acting = { ...context, actor: { ...systemActor, userId, label: link.name } }
  await context.db.transaction().execute(async (trx) => {
    const used = await trx.updateTable('oneTimeLink').set({ usedAt: now(context) }).where('tokenHash', '=', tokenHash).where('usedAt', 'is', null).executeTakeFirst()
    if (used.numUpdatedRows !== 1n || (!askedBy && await becameSigner(trx, userId))) throw new DomainError('link-used')
    await trx.updateTable('user').set({ passwordHash }).where('id', '=', userId).execute()
    await recordAuditEvent(acting, trx, { name: 'account.password-set', subject: 'user', subjectId: userId, data: { by: 'link' } })
    if (resetSecondFactor) await removeSecondFactor(acting, trx, userId)
    await endSessions(acting, trx, { userId, because: 'password set through a link' })
  })
}

/** A link that one person made before the account became a signer's is worth nothing for a signer. */
async function becameSigner(trx: Trx, userId: string): Promise<boolean> {
  const person = await trx.selectFrom('user').select(['passwordHash', 'totpEnabledAt']).where('id', '=', userId).executeTakeFirstOrThrow()
  return isSetUp(person) && await everHeld(trx, userId, rolesWithSecondFactor)
}

async function removeSecondFactor(context: ServiceContext, trx: Trx, userId: string): Promise<void> {
  await trx.updateTable('user').set({ totpSecretSealed: null, totpEnabledAt: null, totpLastStep: null }).where('id', '=', userId).execute()
  await trx.deleteFrom('recoveryCode').where('userId', '=', userId).execute()
  await recordAuditEvent(context, trx, { name: 'account.second-factor-removed', subject: 'user', subjectId: userId, data: {} })
}
