import type { AbsenceRow } from '#shared/schemas/absence'
import type { Database, Trx } from '../connection'

const standing = (db: Database | Trx) => db.selectFrom('absence').where('absence.cancelledAt', 'is', null)

/** The absences of one person that are not over yet on this day, the next one first. */
export async function absencesOf(db: Database | Trx, userId: string, today: string): Promise<AbsenceRow[]> {
  return await standing(db).innerJoin('user as cover', 'cover.id', 'absence.coveredBy')
    .select(['absence.id', 'absence.userId', 'fromDay', 'toDay', 'coveredBy', 'cover.name as coveredByName'])
    .where('absence.userId', '=', userId).where('toDay', '>=', today).orderBy('fromDay').execute()
}

/** Is this person away on some day of the span? */
export async function isAway(db: Database | Trx, userId: string, { fromDay, toDay }: { fromDay: string, toDay: string }): Promise<boolean> {
  return await standing(db).select('id').where('userId', '=', userId).where('fromDay', '<=', toDay).where('toDay', '>=', fromDay).executeTakeFirst() !== undefined
}

/** Ids of the people for whom this person covers on this day. */
export async function coveredOn(db: Database | Trx, coveredBy: string, day: string): Promise<string[]> {
  const rows = await standing(db).select('userId').distinct().where('coveredBy', '=', coveredBy).where('fromDay', '<=', day).where('toDay', '>=', day).execute()
  return rows.map(row => row.userId)
}

/** Who is away on this day, and who covers. */
export async function awayOn(db: Database | Trx, userIds: readonly string[], day: string): Promise<Map<string, { toDay: string, coveredBy: string, coveredByName: string }>> {
  if (userIds.length === 0) return new Map()
  const rows = await standing(db).innerJoin('user as cover', 'cover.id', 'absence.coveredBy').select(['absence.userId', 'toDay', 'coveredBy', 'cover.name as coveredByName'])
    .where('absence.userId', 'in', userIds).where('fromDay', '<=', day).where('toDay', '>=', day).execute()
  return new Map(rows.map(({ userId, ...rest }) => [userId, rest]))
}
