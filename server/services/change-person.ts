import { randomUUID } from 'node:crypto'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { everHeld } from '#server/database/queries/people'
import type { User } from '#server/database/tables/user'
import { DomainError } from '#shared/errors'
import { rolesThatApprove, rolesWithSecondFactor, type Role } from '#shared/permissions'
import type { personSchema } from '#shared/schemas/user'
import { endLinks } from './account-links'
import { changedValues } from './changed-fields'
import { mayAt, now, type ServiceContext } from './context'
import { currentHoldings, openHoldings, type CurrentHolding } from './current-holdings'
import { checkMayWriteEverywhere } from './people-rules'
import { recordAuditEvent } from './record-audit-event'
import { insertHolding, proposeRole, roleNeedsConsent, tellOthers, type RoleWish } from './role-proposals'
import { endSessions } from './sessions'
import { localDate } from './site-time'

export type PersonInput = Omit<z.output<typeof personSchema>, 'inTraining'> & { inTraining?: boolean }
export type PersonChanges = Partial<PersonInput>
interface Wish { siteId: string, role: Role, startsOn?: string | null, endsOn?: string | null }

/**
 * Adds a person without a password; the one-time link comes as a separate act.
 * @returns the new id
 * @throws DomainError 'not-valid' when the address is in use · 'not-allowed' for a role at a site that the actor does not administer
 */
export async function addPerson(context: ServiceContext, input: PersonInput): Promise<string> {
  return await context.db.transaction().execute(trx => addPersonIn(context, trx, input))
}

/** `addPerson` as a part of something larger. */
export async function addPersonIn(context: ServiceContext, trx: Trx, input: PersonInput): Promise<string> {
  const id = randomUUID()
  await checkAddressFree(trx, input.email, id)
  await trx.insertInto('user').values({
    id, email: input.email.toLowerCase(), name: input.name, printedName: input.printedName, credentials: input.credentials, inTraining: input.inTraining ? 1 : 0,
    passwordHash: null, totpSecretSealed: null, totpEnabledAt: null, totpLastStep: null, lastSeenAt: null, deactivatedAt: null, createdAt: now(context), createdBy: context.actor.userId,
  }).execute()
  await recordAuditEvent(context, trx, { name: 'person.added', subject: 'user', subjectId: id, data: {} })
  await grantRoles(context, trx, id, input.holdings)
  return id
}

/**
 * Changes a person and the roles at the actor's own sites; roles elsewhere stay as they are.
 * @throws DomainError 'not-found' · 'not-valid' · 'not-allowed'
 */
export async function changePerson(context: ServiceContext, id: string, changes: PersonChanges): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const person = await trx.selectFrom('user').selectAll().where('id', '=', id).executeTakeFirst()
    if (!person) throw new DomainError('not-found')
    const held = await openHoldings(trx, [id], context.clock())
    const wanted = { email: changes.email?.toLowerCase(), name: changes.name, printedName: changes.printedName, credentials: changes.credentials, inTraining: changes.inTraining === undefined ? undefined : Number(changes.inTraining) }
    const changed = changedValues(person, wanted)
    if (changed.length > 0) await changeFields(context, trx, person, held, changed)
    if (changes.holdings) await changeRoles(context, trx, id, held, changes.holdings)
  })
}

async function changeFields(context: ServiceContext, trx: Trx, person: User, held: readonly CurrentHolding[], changed: ReturnType<typeof changedValues>): Promise<void> {
  checkMayWriteEverywhere(context.actor, held, 'people.write')
  const email = changed.find(change => change.field === 'email')?.after as string | undefined
  if (email !== undefined) {
    if (await opensDesk(trx, person.id)) throw new DomainError('not-valid', { fields: [{ path: 'email', message: 'This account opens the desk of a physician, under the address that was verified for it. Change the address in the directory, and give access anew.' }] })
    if (await keepsItsAddress(trx, person)) throw new DomainError('not-valid', { fields: [{ path: 'email', message: `${person.name} signs or approves, so only ${person.name} changes this address, under Profile.` }] })
    await checkAddressFree(trx, email, person.id)
  }
  const values = Object.fromEntries(changed.map(change => [change.field, change.after]))
  await trx.updateTable('user').set(email === undefined ? values : { ...values, emailConfirmedAt: null }).where('id', '=', person.id).execute()
  await recordAuditEvent(context, trx, { name: 'person.changed', subject: 'user', subjectId: person.id, data: { changes: changed } })
  if (email === undefined) return
  await endLinks(trx, person.id)
  await endSessions(context, trx, { userId: person.id, because: 'e-mail address changed' })
}

const opensDesk = async (trx: Trx, id: string) => await trx.selectFrom('physician').select('id').where('userId', '=', id).executeTakeFirst() !== undefined

/** An account that was set up and ever signed or approved: whoever could change its address could become the second of two people. */
async function keepsItsAddress(trx: Trx, person: User): Promise<boolean> {
  return person.passwordHash !== null && await everHeld(trx, person.id, [...rolesWithSecondFactor, ...rolesThatApprove])
}

async function changeRoles(context: ServiceContext, trx: Trx, id: string, held: readonly CurrentHolding[], wishes: readonly Wish[]): Promise<void> {
  const same = (a: Wish | { siteId: string, role: string }, b: Wish | { siteId: string, role: string }) => a.siteId === b.siteId && a.role === b.role
  const own = held.filter(holding => mayAt(context.actor, 'people.write', holding.siteId))
  const ended = own.filter(holding => !wishes.some(wish => same(wish, holding)))
  for (const holding of ended) await endHolding(context, trx, holding)
  const kept = own.flatMap(holding => wishes.filter(wish => same(wish, holding)).map(wish => ({ holding, wish })))
  for (const { holding, wish } of kept) await changeDates(context, trx, holding, wish)
  await grantRoles(context, trx, id, wishes.filter(wish => !held.some(holding => same(wish, holding))))
  await checkAdministratorsLeft(context, trx, [...ended, ...kept.map(each => each.holding)].filter(holding => holding.role === 'administrator').map(holding => holding.siteId))
}

async function endHolding(context: ServiceContext, trx: Trx, holding: CurrentHolding): Promise<void> {
  const today = localDate(context.clock(), holding.timeZone)
  await trx.updateTable('roleHolding').set({ endsOn: holding.startsOn > today ? holding.startsOn : today }).where('id', '=', holding.id).execute()
  await recordAuditEvent(context, trx, { name: 'role.ended', subject: 'user', subjectId: holding.userId, siteId: holding.siteId, data: { role: holding.role } })
}

/** Other days for a role that is held: the first one only while it has not come, the last one never before today. */
async function changeDates(context: ServiceContext, trx: Trx, holding: CurrentHolding, wish: Wish): Promise<void> {
  const today = localDate(context.clock(), holding.timeZone)
  const dates = { startsOn: holding.startsOn > today ? wish.startsOn ?? holding.startsOn : holding.startsOn, endsOn: wish.endsOn === undefined ? holding.endsOn : wish.endsOn }
  const changed = changedValues({ startsOn: holding.startsOn, endsOn: holding.endsOn }, dates)
  if (changed.length === 0) return
  checkDates(dates, today, holding.startsOn <= today)
  const longer = holding.endsOn !== null && (dates.endsOn === null || dates.endsOn > holding.endsOn)
  if (longer && await roleNeedsConsent(context, trx, { userId: holding.userId, role: holding.role as Role })) throw new DomainError('not-valid', { fields: [{ path: 'holdings', message: 'This role needs a second person, also to last longer. Take it away and give it anew: then somebody is asked to agree.' }] })
  await trx.updateTable('roleHolding').set(dates).where('id', '=', holding.id).execute()
  await recordAuditEvent(context, trx, { name: 'role.dates-changed', subject: 'user', subjectId: holding.userId, siteId: holding.siteId, data: { role: holding.role, changes: changed } })
}

/** `endsOn` is the first day without the role. @throws DomainError 'not-valid' */
function checkDates({ startsOn, endsOn }: { startsOn: string, endsOn: string | null }, today: string, begun: boolean): void {
  const message = !begun && startsOn < today
    ? 'A role begins today or later: what was done before was done without it.'
    : endsOn !== null && (endsOn <= startsOn || endsOn <= today) ? 'The last day of a role lies neither before its first day nor in the past. To end it today, take the role away.' : ''
  if (message) throw new DomainError('not-valid', { fields: [{ path: 'holdings', message }] })
}

/**
 * Gives roles, from today on or between days, at sites that the actor administers. A role that approves, or one for the
 * own account, waits for a second person.
 * @throws DomainError 'not-allowed' · 'not-valid' for the days
 */
export async function grantRoles(context: ServiceContext, trx: Trx, userId: string, wishes: readonly Wish[]): Promise<void> {
  for (const { siteId, role, startsOn, endsOn } of wishes) {
    const site = await trx.selectFrom('site').select('timeZone').where('id', '=', siteId).where('closedAt', 'is', null).executeTakeFirst()
    if (!site || !mayAt(context.actor, 'people.write', siteId)) throw new DomainError('not-allowed')
    const today = localDate(context.clock(), site.timeZone)
    const wish = { userId, siteId, role, startsOn: startsOn ?? today, endsOn: endsOn ?? null }
    checkDates(wish, today, false)
    if (await roleNeedsConsent(context, trx, wish)) await proposeRole(context, trx, wish)
    else await giveAtOnce(context, trx, wish)
  }
}

async function giveAtOnce(context: ServiceContext, trx: Trx, wish: RoleWish): Promise<void> {
  await insertHolding(context, trx, wish)
  if (rolesThatApprove.includes(wish.role)) await tellOthers(context, trx, wish, 'role-given')
}

async function checkAddressFree(trx: Trx, email: string, exceptId: string): Promise<void> {
  const other = await trx.selectFrom('user').select('id').where('email', '=', email.toLowerCase()).where('id', '!=', exceptId).executeTakeFirst()
  if (other) throw new DomainError('not-valid', { fields: [{ path: 'email', message: 'Another account has this e-mail address.' }] })
}

/** Nobody may leave a site without an administrator, by mistake or otherwise, now or on a last day that is known. */
async function checkAdministratorsLeft(context: ServiceContext, trx: Trx, siteIds: readonly string[]): Promise<void> {
  for (const siteId of siteIds) {
    const site = await trx.selectFrom('site').select(['name', 'timeZone']).where('id', '=', siteId).executeTakeFirstOrThrow()
    const today = localDate(context.clock(), site.timeZone)
    const left = await trx.selectFrom('roleHolding').innerJoin('user', 'user.id', 'roleHolding.userId').select('roleHolding.id')
      .where('siteId', '=', siteId).where('role', '=', 'administrator').where('user.deactivatedAt', 'is', null).where('startsOn', '<=', today)
      .where('endsOn', 'is', null).limit(1).execute()
    if (left.length === 0) throw new DomainError('not-valid', { fields: [{ path: 'holdings', message: `${site.name} would have no administrator left. Give someone else that role first.` }] })
  }
}

/**
 * Closes an account: no sign-in, every session over at once, links and role wishes worth nothing. The person's acts and signatures stay.
 * @throws DomainError 'not-found' · 'not-allowed' · 'not-valid' for the own account
 */
export async function deactivatePerson(context: ServiceContext, id: string): Promise<void> {
  if (id === context.actor.userId) throw new DomainError('not-valid', { message: 'Nobody closes the own account. Another administrator has to do it.' })
  await context.db.transaction().execute(async (trx) => {
    const held = await currentHoldings(trx, [id], context.clock())
    checkMayWriteEverywhere(context.actor, held, 'people.write')
    const done = await trx.updateTable('user').set({ deactivatedAt: now(context) }).where('id', '=', id).where('deactivatedAt', 'is', null).executeTakeFirst()
    if (done.numUpdatedRows !== 1n) throw new DomainError('not-found')
    await recordAuditEvent(context, trx, { name: 'person.deactivated', subject: 'user', subjectId: id, data: {} })
    await endLinks(trx, id)
    await trx.updateTable('roleProposal').set({ decidedBy: context.actor.userId, decidedAt: now(context), outcome: 'declined' }).where('userId', '=', id).where('decidedAt', 'is', null).execute()
    await endSessions(context, trx, { userId: id, because: 'account closed' })
    await checkAdministratorsLeft(context, trx, held.filter(holding => holding.role === 'administrator').map(holding => holding.siteId))
  })
}
