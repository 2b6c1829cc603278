import type { Database, Trx } from '#server/database/connection'
import { allHoldings } from '#server/database/queries/people'
import { inForce } from './read-session'
import { localDate } from './site-time'

export type CurrentHolding = Awaited<ReturnType<typeof allHoldings>>[number]

/** The roles that these people hold at this moment, by each site's own calendar. */
export async function currentHoldings(db: Database | Trx, personIds: readonly string[], instant: Date): Promise<CurrentHolding[]> {
  return (await allHoldings(db, personIds)).filter(holding => inForce(holding, instant))
}

/** The roles that count now or will from a later day on. */
export async function openHoldings(db: Database | Trx, personIds: readonly string[], instant: Date): Promise<CurrentHolding[]> {
  return (await allHoldings(db, personIds)).filter(holding => inForce(holding, instant) || (holding.startsOn > localDate(instant, holding.timeZone) && (holding.endsOn === null || holding.endsOn > holding.startsOn)))
}
