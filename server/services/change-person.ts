import { randomUUID } from 'node:crypto'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { Role } from '#shared/permissions'
import type { personSchema } from '#shared/schemas/user'
import { mayAt, now, type ServiceContext } from './context'
import { currentHoldings, type CurrentHolding } from './current-holdings'
import { checkMayWriteEverywhere } from './people-rules'
import { recordAuditEvent } from './record-audit-event'
import { endSessions } from './sessions'
import { localDate } from './site-time'

export type PersonInput = Omit<z.output<typeof personSchema>, 'inTraining'> & { inTraining?: boolean }
export type PersonChanges = Partial<PersonInput>
interface Wish { siteId: string, role: Role }

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
    passwordHash: null, totpSecretSealed: null, totpEnabledAt: null, totpLastStep: null, lastSeenAt: null, deactivatedAt: null, createdAt: now(context),
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
    const held = await currentHoldings(trx, [id], context.clock())
    const wanted = { email: changes.email?.toLowerCase(), name: changes.name, printedName: changes.printedName, credentials: changes.credentials, inTraining: changes.inTraining === undefined ? undefined : Number(changes.inTraining) }
    const fields = (Object.keys(wanted) as (keyof typeof wanted)[]).filter(field => wanted[field] !== undefined && wanted[field] !== person[field])
    if (fields.length > 0) {
      checkMayWriteEverywhere(context.actor, held, 'people.write')
      if (fields.includes('email')) await checkAddressFree(trx, wanted.email!, id)
      await trx.updateTable('user').set(Object.fromEntries(fields.map(field => [field, wanted[field]]))).where('id', '=', id).execute()
      await recordAuditEvent(context, trx, { name: 'person.changed', subject: 'user', subjectId: id, data: { fields } })
      if (fields.includes('email')) await endSessions(context, trx, { userId: id, because: 'e-mail address changed' })
    }
    if (changes.holdings) await changeRoles(context, trx, id, held, changes.holdings)
  })
}

async function changeRoles(context: ServiceContext, trx: Trx, id: string, held: readonly CurrentHolding[], wishes: readonly Wish[]): Promise<void> {
  const same = (a: Wish | { siteId: string, role: string }, b: Wish | { siteId: string, role: string }) => a.siteId === b.siteId && a.role === b.role
  const ended = held.filter(holding => mayAt(context.actor, 'people.write', holding.siteId) && !wishes.some(wish => same(wish, holding)))
  for (const holding of ended) {
    await trx.updateTable('roleHolding').set({ endsOn: localDate(context.clock(), holding.timeZone) }).where('id', '=', holding.id).execute()
    await recordAuditEvent(context, trx, { name: 'role.ended', subject: 'user', subjectId: id, siteId: holding.siteId, data: { role: holding.role } })
  }
  await grantRoles(context, trx, id, wishes.filter(wish => !held.some(holding => same(wish, holding))))
  await checkAdministratorsLeft(context, trx, ended.filter(holding => holding.role === 'administrator').map(holding => holding.siteId))
}

/** Gives roles from today on, at sites that the actor administers. @throws DomainError 'not-allowed' */
export async function grantRoles(context: ServiceContext, trx: Trx, userId: string, wishes: readonly Wish[]): Promise<void> {
  for (const { siteId, role } of wishes) {
    const site = await trx.selectFrom('site').select('timeZone').where('id', '=', siteId).where('closedAt', 'is', null).executeTakeFirst()
    if (!site || !mayAt(context.actor, 'people.write', siteId)) throw new DomainError('not-allowed')
    await trx.insertInto('roleHolding').values({ id: randomUUID(), userId, siteId, role, startsOn: localDate(context.clock(), site.timeZone), endsOn: null, grantedBy: context.actor.userId, createdAt: now(context) }).execute()
    await recordAuditEvent(context, trx, { name: 'role.granted', subject: 'user', subjectId: userId, siteId, data: { role } })
  }
}

async function checkAddressFree(trx: Trx, email: string, exceptId: string): Promise<void> {
  const other = await trx.selectFrom('user').select('id').where('email', '=', email.toLowerCase()).where('id', '!=', exceptId).executeTakeFirst()
  if (other) throw new DomainError('not-valid', { fields: [{ path: 'email', message: 'Another account has this e-mail address.' }] })
}

/** Nobody may leave a site without an administrator, by mistake or otherwise. */
async function checkAdministratorsLeft(context: ServiceContext, trx: Trx, siteIds: readonly string[]): Promise<void> {
  for (const siteId of siteIds) {
    const site = await trx.selectFrom('site').select(['name', 'timeZone']).where('id', '=', siteId).executeTakeFirstOrThrow()
    const today = localDate(context.clock(), site.timeZone)
    const left = await trx.selectFrom('roleHolding').innerJoin('user', 'user.id', 'roleHolding.userId').select('roleHolding.id')
      .where('siteId', '=', siteId).where('role', '=', 'administrator').where('user.deactivatedAt', 'is', null).where('startsOn', '<=', today)
      .where(eb => eb.or([eb('endsOn', 'is', null), eb('endsOn', '>', today)])).limit(1).execute()
    if (left.length === 0) throw new DomainError('not-valid', { fields: [{ path: 'holdings', message: `${site.name} would have no administrator left. Give someone else that role first.` }] })
  }
}

/**
 * Closes an account: no sign-in, every session over at once. The person's acts and signatures stay.
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
    await endSessions(context, trx, { userId: id, because: 'account closed' })
    await checkAdministratorsLeft(context, trx, held.filter(holding => holding.role === 'administrator').map(holding => holding.siteId))
  })
}
