import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { DeskAccessAnswer } from '#shared/schemas/directory'
import { addPersonIn, grantRoles } from './change-person'
import { mayAt, type ServiceContext } from './context'
import { currentHoldings } from './current-holdings'
import { organisationDay } from './organisation-day'
import { recordAuditEvent } from './record-audit-event'
import { endSessions } from './sessions'
import { makeSetUpLink } from './set-up-link'
import { changeShared } from './shared-directory'
import { localDate } from './site-time'

const ROLE = 'referring-physician'

/**
 * Opens the desk to a physician of the directory: an account under the verified address with the role of a referring
 * physician at one site, linked to this entry. An account that has the address already, and proved it, is linked instead of
 * a second one. The link to set the password goes to the verified mailbox; only where no other site's reports could be read
 * with it is it shown on request.
 * @returns the one-time link when it is shown, or where it was mailed; neither when the account has a password
 * @throws DomainError 'not-found' · 'not-valid' when they left, the address is not verified, or they have access · 'not-allowed'
 */
export async function giveDeskAccess(context: ServiceContext, { physicianId, siteId, byMail = true }: { physicianId: string, siteId: string, byMail?: boolean }): Promise<DeskAccessAnswer> {
  if (!mayAt(context.actor, 'people.write', siteId)) throw new DomainError('not-allowed')
  const today = await organisationDay(context)
  const { userId, hasPassword } = await context.db.transaction().execute(async (trx) => {
    const physician = await physicianForAccess(trx, physicianId, today)
    await changeShared(context, trx, physician.practiceId, 'Who opens the desk of a physician')
    const account = await trx.selectFrom('user').selectAll().where('email', '=', physician.email).executeTakeFirst()
    if (account?.deactivatedAt) throw new DomainError('not-valid', { message: 'The account with this address was deactivated. Change the address in the directory, or ask who deactivated it.' })
    // Somebody else could have given an account of their own this address; then its password would open the desk.
    if (account?.passwordHash && account.emailConfirmedAt === null) throw new DomainError('not-valid', { message: 'An account has this address and never confirmed it. Its owner confirms it under Profile first.' })
    const id = account?.id ?? await addPersonIn(context, trx, { email: physician.email, name: physician.name, printedName: '', credentials: physician.title, holdings: [{ siteId, role: ROLE }] })
    if (account && !await holdsRole(context, trx, id, siteId)) await grantRoles(context, trx, id, [{ siteId, role: ROLE }])
    await trx.updateTable('physician').set({ userId: id }).where('id', '=', physicianId).execute()
    await recordAuditEvent(context, trx, { name: 'physician.access-given', subject: 'physician', subjectId: physicianId, siteId, data: { userId: id, newAccount: !account } })
    return { userId: id, hasPassword: Boolean(account?.passwordHash) }
  })
  if (hasPassword) return { userId, link: null, mailedTo: null, expiresAt: null }
  const answer = await makeSetUpLink(context, userId, { resetSecondFactor: false, byMail })
  return answer.waiting ? { userId, link: null, mailedTo: null, expiresAt: null } : { userId, link: answer.link, mailedTo: answer.mailedTo, expiresAt: answer.expiresAt }
}

async function physicianForAccess(trx: Trx, id: string, today: string) {
  const physician = await trx.selectFrom('physician').selectAll().where('id', '=', id).executeTakeFirst()
  if (!physician) throw new DomainError('not-found')
  if (physician.leftOn !== null && physician.leftOn <= today) throw new DomainError('not-valid', { message: 'This physician left the practice.' })
  if (physician.emailVerifiedAt === null) throw new DomainError('not-valid', { message: 'Verify the address first: the account is made under it.' })
  if (physician.userId !== null) throw new DomainError('not-valid', { message: 'This physician has access already. A new set-up link is made under People.' })
  return physician
}

async function holdsRole(context: ServiceContext, trx: Trx, userId: string, siteId: string): Promise<boolean> {
  return (await currentHoldings(trx, [userId], context.clock())).some(holding => holding.siteId === siteId && holding.role === ROLE)
}

/**
 * Takes the desk away: the account no longer stands for this entry. When it stands for no other, its roles as a referring
 * physician at the actor's sites end too. Sessions end at once.
 * @throws DomainError 'not-found' when there is no access
 */
export async function endDeskAccess(context: ServiceContext, physicianId: string): Promise<void> {
  await context.db.transaction().execute(trx => endDeskAccessIn(context, trx, physicianId))
}

/** `endDeskAccess` as a part of something larger. */
export async function endDeskAccessIn(context: ServiceContext, trx: Trx, physicianId: string): Promise<void> {
  const physician = await trx.selectFrom('physician').select('userId').where('id', '=', physicianId).executeTakeFirst()
  if (!physician?.userId) throw new DomainError('not-found')
  const { userId } = physician
  await trx.updateTable('physician').set({ userId: null }).where('id', '=', physicianId).execute()
  await recordAuditEvent(context, trx, { name: 'physician.access-ended', subject: 'physician', subjectId: physicianId, data: { userId } })
  const other = await trx.selectFrom('physician').select('id').where('userId', '=', userId).executeTakeFirst()
  if (!other) await endRoles(context, trx, userId)
  await endSessions(context, trx, { userId, because: 'access to the desk ended' })
}

async function endRoles(context: ServiceContext, trx: Trx, userId: string): Promise<void> {
  const held = (await currentHoldings(trx, [userId], context.clock())).filter(holding => holding.role === ROLE && mayAt(context.actor, 'people.write', holding.siteId))
  for (const holding of held) {
    await trx.updateTable('roleHolding').set({ endsOn: localDate(context.clock(), holding.timeZone) }).where('id', '=', holding.id).execute()
    await recordAuditEvent(context, trx, { name: 'role.ended', subject: 'user', subjectId: userId, siteId: holding.siteId, data: { role: ROLE } })
  }
}
