import { randomUUID } from 'node:crypto'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { roomNames } from '#server/database/queries/site-calendar'
import { siteBasics } from '#server/database/queries/sites'
import { DomainError } from '#shared/errors'
import type { siteSchema, SiteBasics } from '#shared/schemas/user'
import { changedValues } from './changed-fields'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { keepRooms, keepUsualHours } from './site-calendar'
import { isTimeZone, localDate } from './site-time'

export type SiteInput = z.output<typeof siteSchema>

/**
 * Adds a site; whoever adds it is its first administrator.
 * @throws DomainError 'not-valid' when the name is in use or the time zone is unknown
 */
export async function addSite(context: ServiceContext, input: SiteInput): Promise<SiteBasics> {
  return await context.db.transaction().execute(async (trx) => {
    const { id: organisationId } = await trx.selectFrom('organisation').select('id').executeTakeFirstOrThrow()
    await checkSite(trx, input, null)
    const { rooms, ...columns } = input
    const site = await trx.insertInto('site').values({ ...columns, id: randomUUID(), organisationId, closedAt: null, createdAt: now(context) }).returningAll().executeTakeFirstOrThrow()
    await keepRooms(context, trx, site.id, rooms.map(name => ({ name, note: '' })))
    await keepUsualHours(trx, site.id)
    await recordAuditEvent(context, trx, { name: 'site.added', subject: 'site', subjectId: site.id, siteId: site.id, data: {} })
    if (context.actor.userId) await makeAdministrator(context, trx, context.actor.userId, site)
    return siteBasics(site, rooms)
  })
}

/** @throws DomainError 'not-found' · 'not-valid' */
export async function changeSite(context: ServiceContext, id: string, changes: Partial<SiteInput>): Promise<SiteBasics> {
  return await context.db.transaction().execute(async (trx) => {
    const old = await trx.selectFrom('site').selectAll().where('id', '=', id).where('closedAt', 'is', null).executeTakeFirst()
    if (!old) throw new DomainError('not-found')
    await checkSite(trx, { name: changes.name ?? old.name, timeZone: changes.timeZone ?? old.timeZone }, id)
    const oldRooms = (await roomNames(trx, [id])).get(id) ?? []
    const before = siteBasics(old, oldRooms)
    const changed = changedValues(before, changes)
    if (changed.length === 0) return before
    const { rooms, ...columns } = changes
    if (rooms !== undefined && JSON.stringify(rooms) !== JSON.stringify(oldRooms)) await keepRooms(context, trx, id, await withNotes(trx, id, rooms))
    if (Object.values(columns).some(value => value !== undefined)) await trx.updateTable('site').set(columns).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'site.changed', subject: 'site', subjectId: id, siteId: id, data: { changes: changed } })
    return siteBasics(await trx.selectFrom('site').selectAll().where('id', '=', id).executeTakeFirstOrThrow(), rooms ?? oldRooms)
  })
}

/** Rooms given by name alone keep what was noted about them. */
async function withNotes(trx: Trx, siteId: string, names: readonly string[]) {
  const known = await trx.selectFrom('siteRoom').select(['name', 'note']).where('siteId', '=', siteId).execute()
  return names.map(name => ({ name, note: known.find(room => room.name === name)?.note ?? '' }))
}

async function checkSite(trx: Trx, input: { name: string, timeZone: string }, exceptId: string | null): Promise<void> {
  if (!isTimeZone(input.timeZone)) throw new DomainError('not-valid', { fields: [{ path: 'timeZone', message: 'Choose a time zone from the list, for example Europe/Prague.' }] })
  const other = await trx.selectFrom('site').select('id').where('name', '=', input.name).where('id', '!=', exceptId ?? '').executeTakeFirst()
  if (other) throw new DomainError('not-valid', { fields: [{ path: 'name', message: 'Another site has this name.' }] })
}

/** Gives the administrator's role from today on. */
export async function makeAdministrator(context: ServiceContext, trx: Trx, userId: string, site: { id: string, timeZone: string }): Promise<void> {
  await trx.insertInto('roleHolding').values({ id: randomUUID(), userId, siteId: site.id, role: 'administrator', startsOn: localDate(context.clock(), site.timeZone), endsOn: null, grantedBy: context.actor.userId, createdAt: now(context) }).execute()
  await recordAuditEvent(context, trx, { name: 'role.granted', subject: 'user', subjectId: userId, siteId: site.id, data: { role: 'administrator' } })
}
