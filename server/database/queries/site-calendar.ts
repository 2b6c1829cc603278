import type { ClosedDay, OpenSpan, SiteCalendar, SiteRoomView } from '#shared/schemas/site-calendar'
import type { Database } from '../connection'

/** Names of the open rooms of each site, in their order. */
export async function roomNames(db: Pick<Database, 'selectFrom'>, siteIds: readonly string[]): Promise<Map<string, string[]>> {
  const rows = await db.selectFrom('siteRoom').select(['siteId', 'name']).where('siteId', 'in', siteIds).where('closedAt', 'is', null).orderBy('position').orderBy('name').execute()
  const names = new Map<string, string[]>(siteIds.map(id => [id, []]))
  for (const { siteId, name } of rows) names.get(siteId)?.push(name)
  return names
}

/** Every room, the closed ones last. */
export async function siteRooms(db: Pick<Database, 'selectFrom'>, siteId: string): Promise<SiteRoomView[]> {
  const rows = await db.selectFrom('siteRoom').selectAll().where('siteId', '=', siteId).orderBy('position').orderBy('name').execute()
  return rows.map(({ id, name, note, closedAt }) => ({ id, name, note, closed: closedAt !== null })).toSorted((a, b) => Number(a.closed) - Number(b.closed))
}

export async function siteHours(db: Pick<Database, 'selectFrom'>, siteId: string): Promise<OpenSpan[]> {
  return await db.selectFrom('siteHours').select(['weekday', 'opensAt', 'closesAt']).where('siteId', '=', siteId).orderBy('weekday').orderBy('opensAt').execute()
}

/** Closed days from one day on, up to another; all of them where neither is given. */
export async function closedDays(db: Pick<Database, 'selectFrom'>, siteId: string, { from = '', until = '9999' }: { from?: string, until?: string } = {}): Promise<ClosedDay[]> {
  return await db.selectFrom('siteClosedDay').select(['day', 'reason']).where('siteId', '=', siteId).where('day', '>=', from).where('day', '<', until).orderBy('day').execute()
}

/** @example siteCalendar(db, siteId) // => { rooms: [{ name: 'Room 1', … }], hours: [{ weekday: 1, opensAt: '08:00', closesAt: '17:00' }], closedDays: [] } */
export async function siteCalendar(db: Database, siteId: string): Promise<SiteCalendar> {
  const [rooms, hours, closed] = await Promise.all([siteRooms(db, siteId), siteHours(db, siteId), closedDays(db, siteId)])
  return { rooms, hours, closedDays: closed }
}
