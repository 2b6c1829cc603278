import { sql } from 'kysely'
import type { Page } from '#shared/schemas/common'
import type { PhysicianView } from '#shared/schemas/directory'
import type { Database } from '../connection'

const physicians = (db: Database, today: string) => db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId')
  .select(['physician.id', 'physician.name', 'physician.title', 'physician.email', 'physician.practiceId', 'practice.name as practiceName', 'practice.town', 'practice.deliveryMethod'])
  .select([
    sql<number>`physician.email_verified_at IS NOT NULL`.as('emailVerified'),
    sql<number>`practice.passphrase_handed_over_at IS NOT NULL`.as('passphraseHandedOver'),
    sql<number>`practice.closed_at IS NOT NULL OR coalesce(physician.left_on <= ${today}, 0)`.as('left'),
    sql<number>`(SELECT count(*) FROM physician other WHERE other.name = physician.name AND other.id <> physician.id)`.as('namesakes'),
  ])

type Row = Awaited<ReturnType<ReturnType<typeof physicians>['executeTakeFirstOrThrow']>>
const physicianView = (row: Row): PhysicianView => ({ ...row, emailVerified: row.emailVerified === 1, passphraseHandedOver: row.passphraseHandedOver === 1, left: row.left === 1 })

/** Every word must occur in the name, the practice or the town; those who left stand last. */
export async function searchPhysicians(db: Database, { search, page, pageSize, today }: { search: string, page: number, pageSize: number, today: string }): Promise<Page<PhysicianView>> {
  const words = search.trim().split(/\s+/).filter(Boolean).slice(0, 8)
  const fits = words.map(word => sql<boolean>`(physician.name || ' ' || practice.name || ' ' || practice.town) LIKE ${`%${word.replace(/[\\%_]/g, '\\$&')}%`} ESCAPE '\\'`)
  const found = fits.reduce((query, fit) => query.where(fit), physicians(db, today))
  const { total } = await db.selectFrom(found.as('found')).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await found.orderBy('left').orderBy('physician.name').orderBy('physician.id').limit(pageSize).offset((page - 1) * pageSize).execute()
  return { rows: rows.map(physicianView), total, page, pageSize }
}

export async function physicianById(db: Database, id: string, today: string): Promise<PhysicianView | undefined> {
  const row = await physicians(db, today).where('physician.id', '=', id).executeTakeFirst()
  return row && physicianView(row)
}
