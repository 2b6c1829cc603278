import { sql } from 'kysely'
import { nameKey } from '#shared/name-key'
import type { Page } from '#shared/schemas/common'
import type { DirectoryNamesake, PhysicianView } from '#shared/schemas/directory'
import type { Database } from '../connection'

/** SQL for "no longer there": the practice closed, or the physician left it on or before that day. */
export const isLeft = (today: string) => sql<number>`practice.closed_at IS NOT NULL OR coalesce(physician.left_on <= ${today}, 0)`

const physicians = (db: Database, today: string) => db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId').where('physician.mergedInto', 'is', null)
  .select(['physician.id', 'physician.name', 'physician.title', 'physician.email', 'physician.practiceId', 'practice.name as practiceName', 'practice.town', 'practice.deliveryMethod'])
  .select([
    sql<number>`physician.email_verified_at IS NOT NULL`.as('emailVerified'),
    sql<number>`practice.passphrase_handed_over_at IS NOT NULL`.as('passphraseHandedOver'),
    isLeft(today).as('left'),
  ])

type Row = Awaited<ReturnType<ReturnType<typeof physicians>['executeTakeFirstOrThrow']>>

/** How many entries have a name that could be taken for another, by `nameKey`. */
async function entriesOfName(db: Database): Promise<Map<string, number>> {
  const counts = new Map<string, number>()
  for (const { name } of await db.selectFrom('physician').select('name').where('mergedInto', 'is', null).execute()) counts.set(nameKey(name), (counts.get(nameKey(name)) ?? 0) + 1)
  return counts
}

const physicianView = (row: Row, entries: Map<string, number>): PhysicianView => ({ ...row, emailVerified: row.emailVerified === 1, passphraseHandedOver: row.passphraseHandedOver === 1, left: row.left === 1, namesakes: (entries.get(nameKey(row.name)) ?? 1) - 1 })

/** Words as a person types them; each has to occur. */
const wordsOf = (search: string) => search.trim().split(/\s+/).filter(Boolean).slice(0, 8).map(word => `%${word.replace(/[\\%_]/g, '\\$&')}%`)

/** Every word must occur in the name, the practice or the town; those who left stand last. */
export async function searchPhysicians(db: Database, { search, page, pageSize, today }: { search: string, page: number, pageSize: number, today: string }): Promise<Page<PhysicianView>> {
  const fits = wordsOf(search).map(word => sql<boolean>`(physician.name || ' ' || practice.name || ' ' || practice.town) LIKE ${word} ESCAPE '\\'`)
  const found = fits.reduce((query, fit) => query.where(fit), physicians(db, today))
  const { total } = await db.selectFrom(found.as('found')).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await found.orderBy('left').orderBy('physician.name').orderBy('physician.id').limit(pageSize).offset((page - 1) * pageSize).execute()
  const entries = rows.length > 0 ? await entriesOfName(db) : new Map<string, number>()
  return { rows: rows.map(row => physicianView(row, entries)), total, page, pageSize }
}

export async function physicianById(db: Database, id: string, today: string): Promise<PhysicianView | undefined> {
  const row = await physicians(db, today).where('physician.id', '=', id).executeTakeFirst()
  return row && physicianView(row, await entriesOfName(db))
}

/** Everyone else in the directory whose name could be taken for this one, with practice and town to tell them apart. */
export async function directoryNamesakes(db: Database, { name, exceptId, today }: { name: string, exceptId?: string, today: string }): Promise<DirectoryNamesake[]> {
  const key = nameKey(name)
  if (key.length < 3) return []
  const rows = await physicians(db, today).orderBy('practice.town').orderBy('practice.name').execute()
  return rows.filter(row => row.id !== exceptId && nameKey(row.name) === key)
    .map(({ id, name: other, practiceId, practiceName, town, left }) => ({ id, name: other, practiceId, practiceName, town, left: left === 1 }))
}

export interface PracticeWish { search: string, show: 'all' | 'to-do' | 'same-name', page: number, pageSize: number, today: string }

/** Every word must occur in the practice's name, its town or the name of one of its physicians. */
function practices(db: Database, { search, show, today }: PracticeWish, doubles: readonly string[]) {
  const words = sql`practice.name || ' ' || practice.town || ' ' || coalesce((SELECT group_concat(physician.name, ' ') FROM physician WHERE physician.practice_id = practice.id), '')`
  const fits = wordsOf(search).map(word => sql<boolean>`(${words}) LIKE ${word} ESCAPE '\\'`)
  const toDo = sql<boolean>`practice.closed_at IS NULL AND (practice.passphrase_handed_over_at IS NULL OR EXISTS (SELECT 1 FROM physician WHERE physician.practice_id = practice.id AND physician.email_verified_at IS NULL AND NOT (${isLeft(today)})))`
  return fits.reduce((query, fit) => query.where(fit), db.selectFrom('practice')).$if(show === 'to-do', query => query.where(toDo)).$if(show === 'same-name', query => query.where('practice.id', 'in', doubles))
}

/** Practices with a physician whose name stands in the directory once more: one person entered twice, or two to tell apart. */
async function practicesWithDoubles(db: Database, today: string): Promise<string[]> {
  const rows = await physicians(db, today).where('practice.closedAt', 'is', null).execute()
  const entries = await entriesOfName(db)
  return [...new Set(rows.filter(row => (entries.get(nameKey(row.name)) ?? 1) > 1).map(row => row.practiceId))]
}

/** Practices by name, with their physicians: those who left stand last. */
export async function practicePage(db: Database, wish: PracticeWish) {
  const doubles = wish.show === 'same-name' ? await practicesWithDoubles(db, wish.today) : []
  const { total } = await practices(db, wish, doubles).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await practices(db, wish, doubles).selectAll('practice').orderBy('practice.name').orderBy('practice.town').orderBy('practice.id').limit(wish.pageSize).offset((wish.page - 1) * wish.pageSize).execute()
  return { rows, total, people: await physiciansAt(db, rows.map(row => row.id), wish.today) }
}

/** The entries of these practices, those who left last, each with the account that is linked to it. */
export async function physiciansAt(db: Database, practiceIds: readonly string[], today: string) {
  return await db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId').leftJoin('user', 'user.id', 'physician.userId')
    .selectAll('physician').select([isLeft(today).as('left'), 'user.email as accountEmail', 'user.deactivatedAt', sql<number>`user.password_hash IS NOT NULL`.as('hasPassword')])
    .where('physician.practiceId', 'in', practiceIds).where('physician.mergedInto', 'is', null).orderBy('left').orderBy('physician.name').orderBy('physician.id').execute()
}

export async function practiceById(db: Database, id: string) {
  return await db.selectFrom('practice').selectAll().where('id', '=', id).executeTakeFirst()
}

/** Reports that could not be mailed to these people and wait at these sites, oldest first. */
export async function waitingDeliveries(db: Database, physicianIds: readonly string[], siteIds: readonly string[]) {
  return await db.selectFrom('delivery').select(['id', 'physicianId']).where('physicianId', 'in', physicianIds).where('siteId', 'in', siteIds)
    .where('state', 'in', ['given-up', 'bounced']).orderBy('createdAt').execute()
}
