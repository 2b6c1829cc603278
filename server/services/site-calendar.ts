import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { siteCalendar } from '#server/database/queries/site-calendar'
import { DomainError } from '#shared/errors'
import type { OpenSpan, SiteCalendar, SiteRoomsInput } from '#shared/schemas/site-calendar'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { localDate } from './site-time'

async function openSite(trx: Trx, siteId: string) {
  const site = await trx.selectFrom('site').select(['id', 'timeZone']).where('id', '=', siteId).where('closedAt', 'is', null).executeTakeFirst()
  if (!site) throw new DomainError('not-found')
  return site
}

async function change(context: ServiceContext, siteId: string, field: keyof SiteCalendar, act: (trx: Trx, site: { id: string, timeZone: string }) => Promise<void>): Promise<SiteCalendar> {
  await context.db.transaction().execute(async (trx) => {
    const site = await openSite(trx, siteId)
    const before = (await siteCalendar(trx, siteId))[field]
    await act(trx, site)
    const after = (await siteCalendar(trx, siteId))[field]
    await recordAuditEvent(context, trx, { name: 'site.changed', subject: 'site', subjectId: siteId, siteId, data: { changes: [{ field, before, after }] } })
  })
  return await siteCalendar(context.db, siteId)
}

/** Rooms where something is booked from now on: they can neither be closed nor renamed. */
async function bookedRooms(context: ServiceContext, trx: Trx, siteId: string): Promise<Set<string>> {
  const rows = await trx.selectFrom('booking').select('room').distinct().where('siteId', '=', siteId).where('endsAt', '>', now(context)).where('state', 'in', ['booked', 'arrived']).execute()
  return new Set(rows.map(row => row.room))
}

/**
 * The rooms of a site in the transaction of whoever changes them: what is left out is closed, a closed name that comes
 * back is opened again.
 * @throws DomainError 'not-valid' when a name is there twice or a room with bookings ahead would go or change its name
 */
export async function keepRooms(context: ServiceContext, trx: Trx, siteId: string, rooms: SiteRoomsInput): Promise<void> {
  const twice = rooms.findIndex((room, index) => rooms.findIndex(other => other.name.toLowerCase() === room.name.toLowerCase()) < index)
  if (twice >= 0) throw new DomainError('not-valid', { fields: [{ path: `rooms[${twice}].name`, message: 'Another room has this name.' }] })
  const before = await trx.selectFrom('siteRoom').selectAll().where('siteId', '=', siteId).execute()
  const booked = await bookedRooms(context, trx, siteId)
  const kept = rooms.map(room => ({ ...room, row: before.find(row => row.id === room.id) ?? before.find(row => row.name === room.name) }))
  const lost = before.find(row => row.closedAt === null && booked.has(row.name) && !kept.some(room => room.row?.id === row.id && room.name === row.name))
  if (lost) throw new DomainError('not-valid', { fields: [{ path: 'rooms', message: `${lost.name} has bookings ahead. Move them first.` }] })
  const goes = before.filter(row => row.closedAt === null && !kept.some(room => room.row?.id === row.id))
  for (const row of goes) await trx.updateTable('siteRoom').set({ closedAt: now(context) }).where('id', '=', row.id).execute()
  for (const [position, { name, note, row }] of kept.entries()) {
    if (row) await trx.updateTable('siteRoom').set({ name, note, position, closedAt: null }).where('id', '=', row.id).execute()
    else await trx.insertInto('siteRoom').values({ id: randomUUID(), siteId, name, note, position, closedAt: null }).execute()
  }
}

/** The week that most laboratories work, for a site that has just been added: common practice, to be corrected. */
export async function keepUsualHours(trx: Trx, siteId: string): Promise<void> {
  for (const weekday of [1, 2, 3, 4, 5]) await trx.insertInto('siteHours').values({ siteId, weekday, opensAt: '08:00', closesAt: '17:00' }).execute()
}

/** @throws DomainError as `keepRooms` */
export function changeRooms(context: ServiceContext, siteId: string, rooms: SiteRoomsInput): Promise<SiteCalendar> {
  return change(context, siteId, 'rooms', trx => keepRooms(context, trx, siteId, rooms))
}

/** Replaces the working hours of the week. Bookings that now lie outside stay; the week view shows them so. */
export function changeHours(context: ServiceContext, siteId: string, hours: readonly OpenSpan[]): Promise<SiteCalendar> {
  return change(context, siteId, 'hours', async (trx) => {
    await trx.deleteFrom('siteHours').where('siteId', '=', siteId).execute()
    for (const { weekday, opensAt, closesAt } of hours) await trx.insertInto('siteHours').values({ siteId, weekday, opensAt, closesAt }).execute()
  })
}

/** Closes a site for a day, or gives the reason anew. Bookings of that day stay until somebody moves them. @throws DomainError 'not-valid' for a past day */
export function addClosedDay(context: ServiceContext, siteId: string, { day, reason }: { day: string, reason: string }): Promise<SiteCalendar> {
  return change(context, siteId, 'closedDays', async (trx, site) => {
    if (day < localDate(context.clock(), site.timeZone)) throw new DomainError('not-valid', { fields: [{ path: 'day', message: 'The day must not lie in the past.' }] })
    await trx.insertInto('siteClosedDay').values({ siteId, day, reason }).onConflict(conflict => conflict.columns(['siteId', 'day']).doUpdateSet({ reason })).execute()
  })
}

/** The site works on that day after all. */
export function removeClosedDay(context: ServiceContext, siteId: string, day: string): Promise<SiteCalendar> {
  return change(context, siteId, 'closedDays', async (trx) => {
    const gone = await trx.deleteFrom('siteClosedDay').where('siteId', '=', siteId).where('day', '=', day).executeTakeFirst()
    if (gone.numDeletedRows === 0n) throw new DomainError('not-found')
  })
}
