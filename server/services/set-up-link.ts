import type { Trx } from '#server/database/connection'
import { everHeld } from '#server/database/queries/people'
import { sitesUsing } from '#server/database/queries/practice-use'
import type { User } from '#server/database/tables/user'
import { DomainError } from '#shared/errors'
import { rolesThatApprove, rolesWithSecondFactor } from '#shared/permissions'
import type { SetUpLinkAnswer } from '#shared/schemas/user'
import { ASKED, endLinks, insertLink, LINK, linkHours, type LinkData } from './account-links'
import { mayAt, now, systemActor, type ServiceContext } from './context'
import { currentHoldings } from './current-holdings'
import { hashNewPassword } from './change-password'
import { checkMayWriteEverywhere } from './people-rules'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'
import { checkSecondPerson, othersWhoApprove } from './second-person'
import { endSessions } from './sessions'

export interface LinkWish { resetSecondFactor: boolean, /** to the person's mailbox instead of the asker's screen */ byMail?: boolean }

/**
 * Makes a one-time link with which a person sets the own password; whoever makes it learns no password. It is shown once
 * (24 hours) or mailed to the person (72 hours), who proves the mailbox by using it. For an account that was set up and
 * signs or approves two different people have to ask within 24 hours: otherwise one administrator alone could sign as a
 * doctor, or be the second of two. Such a person is whoever ever was one, since a role can be ended before and given back
 * afterwards. Where an administrator has nobody else to ask, the link goes to the mailbox. The second factor stays unless
 * both asked to reset it.
 * @throws DomainError 'not-allowed' when the asker does not administer every site of the person
 */
export async function makeSetUpLink(context: ServiceContext, personId: string, wish: LinkWish): Promise<SetUpLinkAnswer> {
  return await context.db.transaction().execute(async (trx) => {
    const person = await trx.selectFrom('user').selectAll().where('id', '=', personId).where('deactivatedAt', 'is', null).executeTakeFirst()
    if (!person) throw new DomainError('not-found')
    const holdings = await currentHoldings(trx, [personId], context.clock())
    const needs = await needsOf(context, trx, person)
    checkMayWriteEverywhere(context.actor, holdings, needs === 'one person' ? 'people.write' : 'people.read')
    const askedBy = needs === 'two people' ? await otherWhoAsked(context, trx, personId, wish.resetSecondFactor) : null
    if (needs === 'two people' && !askedBy) return await noteAsking(context, trx, personId, wish.resetSecondFactor)
    const byMail = wish.byMail === true || needs === 'the mailbox'
    return await writeLink(context, trx, person, { resetSecondFactor: wish.resetSecondFactor, askedBy, madeBy: context.actor.userId, ...byMail ? { mailedTo: person.email } : {} })
  })
}

const isSetUp = (person: Pick<User, 'passwordHash' | 'totpEnabledAt'>) => person.passwordHash !== null || person.totpEnabledAt !== null
export const isSigner = async (trx: Trx, personId: string): Promise<boolean> => await everHeld(trx, personId, rolesWithSecondFactor)

/** What a link for this account needs besides the one who asks. */
async function needsOf(context: ServiceContext, trx: Trx, person: User): Promise<'one person' | 'two people' | 'the mailbox'> {
  if (await readsElsewhere(context, trx, person.id)) return 'the mailbox'
  if (!isSetUp(person)) return 'one person'
  if (await isSigner(trx, person.id)) return 'two people'
  if (!await everHeld(trx, person.id, rolesThatApprove)) return 'one person'
  const others = await othersWhoApprove(context, trx, [context.actor.userId, person.id])
  return others.length > 0 ? 'two people' : person.emailConfirmedAt !== null ? 'the mailbox' : 'one person'
}

/** An account that opens the desk of a physician whose reports come from sites that the asker does not administer. */
async function readsElsewhere(context: ServiceContext, trx: Trx, personId: string): Promise<boolean> {
  const entries = await trx.selectFrom('physician').select('practiceId').distinct().where('userId', '=', personId).execute()
  for (const { practiceId } of entries) {
    if ((await sitesUsing(trx, practiceId)).some(site => !mayAt(context.actor, 'people.write', site.id))) return true
  }
  return false
}

/** The other person who asked, after the present one was found to be a second person to that one. */
async function otherWhoAsked(context: ServiceContext, trx: Trx, personId: string, resetSecondFactor: boolean): Promise<string | null> {
  const rows = await trx.selectFrom('oneTimeLink').select('dataJson').where('purpose', '=', ASKED).where('userId', '=', personId).where('expiresAt', '>', now(context)).execute()
  const askings = rows.map(row => JSON.parse(row.dataJson) as LinkData)
  const other = askings.find(asking => asking.askedBy !== context.actor.userId && asking.askedBy !== personId && asking.resetSecondFactor === resetSecondFactor)?.askedBy ?? null
  if (other) await checkSecondPerson(context, trx, other)
  return other
}

async function noteAsking(context: ServiceContext, trx: Trx, personId: string, resetSecondFactor: boolean): Promise<SetUpLinkAnswer> {
  await insertLink(context, trx, { purpose: ASKED, personId, hours: linkHours.shown, data: { resetSecondFactor, askedBy: context.actor.userId } })
  await recordAuditEvent(context, trx, { name: 'account.link-asked', subject: 'user', subjectId: personId, data: {} })
  return { waiting: true }
}

async function writeLink(context: ServiceContext, trx: Trx, person: User, data: LinkData): Promise<SetUpLinkAnswer> {
  await endLinks(trx, person.id)
  const hours = data.mailedTo ? linkHours.mailed : linkHours.shown
  const { token, expiresAt } = await insertLink(context, trx, { purpose: LINK, personId: person.id, hours, data })
  await recordAuditEvent(context, trx, { name: 'account.link-made', subject: 'user', subjectId: person.id, data: { askedBy: data.askedBy, byMail: data.mailedTo !== undefined } })
  if (!data.mailedTo) return { waiting: false, link: `${new URL(context.settings.appOrigin).origin}/set-password#${token}`, mailedTo: null, expiresAt }
  await mailLink(context, trx, { toAddress: data.mailedTo, token, hours, about: isSetUp(person) ? 'reset' : 'invitation' })
  return { waiting: false, link: null, mailedTo: data.mailedTo, expiresAt }
}

export async function mailLink(context: ServiceContext, trx: Trx, { toAddress, ...data }: { toAddress: string, token: string, hours: number, about: 'invitation' | 'reset' }): Promise<void> {
  const organisation = await trx.selectFrom('organisation').select('name').executeTakeFirstOrThrow()
  await queueMail(context, trx, { template: 'account-link', toAddress, data: { ...data, organisation: organisation.name } })
}

/**
 * Sets a password through a one-time link and ends every session of that person.
 * @throws DomainError 'link-used' · 'not-valid'
 */
export async function setPassword(context: ServiceContext, input: { token: string, password: string }): Promise<void> {
  const tokenHash = context.keys.tokenHash(input.token)
  const link = await context.db.selectFrom('oneTimeLink').innerJoin('user', 'user.id', 'oneTimeLink.userId').selectAll('oneTimeLink').select(['user.name', 'user.email'])
    .where('tokenHash', '=', tokenHash).where('purpose', '=', LINK).where('usedAt', 'is', null).where('expiresAt', '>', now(context)).where('user.deactivatedAt', 'is', null).executeTakeFirst()
  if (!link?.userId) throw new DomainError('link-used')
  const data = JSON.parse(link.dataJson) as LinkData
  const { resetSecondFactor, mailedTo } = data
  const userId = link.userId
  const passwordHash = await hashNewPassword(context, userId, input.password, 'password', resetSecondFactor)
  const acting = { ...context, actor: { ...systemActor, userId, label: link.name } }
  await context.db.transaction().execute(async (trx) => {
    const used = await trx.updateTable('oneTimeLink').set({ usedAt: now(context) }).where('tokenHash', '=', tokenHash).where('usedAt', 'is', null).executeTakeFirst()
    if (used.numUpdatedRows !== 1n || await isWorthLessNow(context, trx, userId, data)) throw new DomainError('link-used')
    await trx.updateTable('user').set({ passwordHash }).where('id', '=', userId).execute()
    await recordAuditEvent(acting, trx, { name: 'account.password-set', subject: 'user', subjectId: userId, data: { by: 'link' } })
    if (resetSecondFactor) await removeSecondFactor(acting, trx, userId)
    if (mailedTo === link.email) await confirmByLink(acting, trx, userId)
    await endSessions(acting, trx, { userId, because: 'password set through a link' })
  })
}

/** Whoever used a mailed link reads that mailbox. */
async function confirmByLink(context: ServiceContext, trx: Trx, userId: string): Promise<void> {
  const done = await trx.updateTable('user').set({ emailConfirmedAt: now(context) }).where('id', '=', userId).where('emailConfirmedAt', 'is', null).executeTakeFirst()
  if (done.numUpdatedRows === 1n) await recordAuditEvent(context, trx, { name: 'account.address-confirmed', subject: 'user', subjectId: userId, data: { by: 'link' } })
}

/**
 * A link that one person made before the account became one that needs two: for a signer it is worth nothing, for whoever
 * approves it is worth something only when it went to the mailbox, or nobody else was there to ask.
 */
async function isWorthLessNow(context: ServiceContext, trx: Trx, userId: string, { askedBy, mailedTo, madeBy }: LinkData): Promise<boolean> {
  const person = await trx.selectFrom('user').select(['passwordHash', 'totpEnabledAt']).where('id', '=', userId).executeTakeFirstOrThrow()
  if (askedBy || !isSetUp(person)) return false
  if (await isSigner(trx, userId)) return true
  if (mailedTo || !await everHeld(trx, userId, rolesThatApprove)) return false
  return (await othersWhoApprove(context, trx, [userId, madeBy ?? null])).length > 0
}

async function removeSecondFactor(context: ServiceContext, trx: Trx, userId: string): Promise<void> {
  await trx.updateTable('user').set({ totpSecretSealed: null, totpEnabledAt: null, totpLastStep: null }).where('id', '=', userId).execute()
  await trx.deleteFrom('recoveryCode').where('userId', '=', userId).execute()
  await recordAuditEvent(context, trx, { name: 'account.second-factor-removed', subject: 'user', subjectId: userId, data: {} })
}
