import { sql } from 'kysely'
import type { Trx } from '#server/database/connection'

const prefixes = { referral: 'REF', study: 'NCS', patient: 'P', report: 'REP' } as const
export type NumberedThing = keyof typeof prefixes

/**
 * The next number in use, inside the caller's transaction: a rolled-back act leaves no gap.
 * Patients are numbered for ever, everything else anew each year.
 * @example await nextNumber(trx, 'study', 2026) // => 'NCS-2026-004217'
 */
export async function nextNumber(trx: Trx, thing: NumberedThing, year: number): Promise<string> {
  const series = thing === 'patient' ? prefixes.patient : `${prefixes[thing]}-${year}`
  const row = await trx.insertInto('counter').values({ name: series, value: 1 })
    .onConflict(conflict => conflict.column('name').doUpdateSet({ value: sql<number>`counter.value + 1` }))
    .returning('value').executeTakeFirstOrThrow()
  return `${series}-${String(row.value).padStart(6, '0')}`
}
