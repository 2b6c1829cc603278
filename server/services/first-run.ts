import { randomUUID } from 'node:crypto'
import { sql } from 'kysely'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { reportWords } from '#shared/report/words'
import type { firstAdministratorSchema } from '#shared/schemas/user'
import { makeAdministrator } from './change-site'
import { actingAs, now, type ServiceContext } from './context'
import { newToken } from './keys'
import { complaintAbout, hashPassword } from './passwords'
import { recordAuditEvent } from './record-audit-event'
import { isTimeZone } from './site-time'
import { keepUsualHours } from './site-calendar'

export const FIRST_RUN = 'first-run'
const DAY_MS = 86_400_000
/** Stands on every report until the organisation words its own. */
type FirstAdministrator = z.output<typeof firstAdministratorSchema>

/**
 * Makes the one-time link of the first administrator; each start replaces the one before. Only its hash is stored.
 * @returns the address to print on the console, or null as soon as one person exists, and in the demonstration
 */
export async function writeFirstRunLink(context: ServiceContext): Promise<string | null> {
  if (context.settings.demonstration || !await nobodyExists(context)) return null
  const token = newToken()
  await context.db.transaction().execute(async (trx) => {
    await trx.deleteFrom('oneTimeLink').where('purpose', '=', FIRST_RUN).execute()
    await trx.insertInto('oneTimeLink').values({
      tokenHash: context.keys.tokenHash(token), purpose: FIRST_RUN, userId: null, createdAt: now(context),
      expiresAt: new Date(context.clock().getTime() + DAY_MS).toISOString(), usedAt: null,
    }).execute()
  })
  // After #: browsers send that part to no server, so that no proxy's log can hold the token.
  return `${new URL(context.settings.appOrigin).origin}/first-run#${token}`
}

export async function nobodyExists(context: Pick<ServiceContext, 'db'>): Promise<boolean> {
  const { rows } = await sql`select 1 from user limit 1`.execute(context.db)
  return rows.length === 0
}

/**
 * Makes the organisation, its first site and its first administrator through the one-time link.
 * @throws DomainError 'link-used' when the link is wrong, old or used, or somebody exists already · 'not-valid' for the password or the time zone
 */
export async function makeFirstAdministrator(context: ServiceContext, input: FirstAdministrator): Promise<void> {
  const tokenHash = context.keys.tokenHash(input.token)
  const link = await context.db.selectFrom('oneTimeLink').select('tokenHash').where('tokenHash', '=', tokenHash).where('purpose', '=', FIRST_RUN).where('usedAt', 'is', null).where('expiresAt', '>', now(context)).executeTakeFirst()
  if (!link) throw new DomainError('link-used', { message: 'This link was used before or is too old. Start the server again: it prints a new one.' })
  if (!isTimeZone(input.timeZone)) throw new DomainError('not-valid', { fields: [{ path: 'timeZone', message: 'Choose a time zone from the list, for example Europe/Prague.' }] })
  const complaint = complaintAbout(input.password, { secondFactor: false, ownWords: [input.organisationName, input.siteName, input.town, input.name, input.email] })
  if (complaint) throw new DomainError('not-valid', { fields: [{ path: 'password', message: complaint }] })
  const passwordHash = await hashPassword(input.password)
  await context.db.transaction().execute(async (trx) => {
    const used = await trx.updateTable('oneTimeLink').set({ usedAt: now(context) }).where('tokenHash', '=', tokenHash).where('usedAt', 'is', null).executeTakeFirst()
    if (used.numUpdatedRows !== 1n || !await nobodyExists({ db: trx })) throw new DomainError('link-used')
    await writeFirst(context, trx, input, passwordHash)
  })
}

async function writeFirst(context: ServiceContext, trx: Trx, input: FirstAdministrator, passwordHash: string): Promise<void> {
  const createdAt = now(context)
  const [organisationId, userId] = [randomUUID(), randomUUID()]
  const site = { id: randomUUID(), timeZone: input.timeZone }
  const acting = actingAs(context, { userId, label: input.name, holdings: [] })
  await trx.insertInto('organisation').values({ id: organisationId, name: input.organisationName, timeZone: input.timeZone, disclaimer: reportWords('en').disclaimerText, createdAt }).execute()
  await trx.insertInto('site').values({ ...site, organisationId, name: input.siteName, town: input.town, closedAt: null, createdAt }).execute()
  await trx.insertInto('siteRoom').values({ id: randomUUID(), siteId: site.id, name: 'Room 1', position: 0, closedAt: null }).execute()
  await keepUsualHours(trx, site.id)
  await trx.insertInto('user').values({ id: userId, email: input.email.toLowerCase(), name: input.name, printedName: input.name, passwordHash, totpSecretSealed: null, totpEnabledAt: null, totpLastStep: null, lastSeenAt: null, deactivatedAt: null, createdAt }).execute()
  await recordAuditEvent(acting, trx, { name: 'organisation.set-up', subject: 'organisation', subjectId: organisationId, data: {} })
  await recordAuditEvent(acting, trx, { name: 'site.added', subject: 'site', subjectId: site.id, siteId: site.id, data: {} })
  await recordAuditEvent(acting, trx, { name: 'account.password-set', subject: 'user', subjectId: userId, data: { by: 'first-run' } })
  await makeAdministrator(acting, trx, userId, site)
}
