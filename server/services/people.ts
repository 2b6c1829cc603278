import { findPerson, listPeople as listRows } from '#server/database/queries/people'
import { DomainError } from '#shared/errors'
import type { Role } from '#shared/permissions'
import type { Page, PageQuery } from '#shared/schemas/common'
import type { PersonRow } from '#shared/schemas/user'
import type { ServiceContext } from './context'
import { openHoldings, type CurrentHolding } from './current-holdings'
import { inForce } from './read-session'

type Row = Awaited<ReturnType<typeof listRows>>['rows'][number]

/** Roles at sites that the asker does not administer stay out of sight. */
function toRow(row: Row, holdings: readonly CurrentHolding[], sites: readonly string[], instant: Date): PersonRow {
  return {
    id: row.id, email: row.email, emailConfirmed: row.emailConfirmedAt !== null, name: row.name, printedName: row.printedName, credentials: row.credentials, inTraining: row.inTraining === 1,
    holdings: holdings.filter(holding => holding.userId === row.id && sites.includes(holding.siteId)).map(holding => ({ siteId: holding.siteId, siteName: holding.siteName, role: holding.role as Role, startsOn: holding.startsOn, endsOn: holding.endsOn, inForce: inForce(holding, instant) })),
    secondFactor: row.totpEnabledAt !== null, lastSeenAt: row.lastSeenAt, deactivated: row.deactivatedAt !== null, hasPassword: row.hasPassword === 1,
  }
}

export async function listPeople(context: ServiceContext, sites: readonly string[], query: PageQuery): Promise<Page<PersonRow>> {
  const { rows, total } = await listRows(context.db, sites, query)
  const holdings = await openHoldings(context.db, rows.map(row => row.id), context.clock())
  return { rows: rows.map(row => toRow(row, holdings, sites, context.clock())), total, page: query.page, pageSize: query.pageSize }
}

/** @throws DomainError 'not-found' for a person whom the asker's sites do not know */
export async function viewPerson(context: ServiceContext, sites: readonly string[], id: string): Promise<PersonRow> {
  const row = await findPerson(context.db, sites, id)
  if (!row) throw new DomainError('not-found')
  return toRow(row, await openHoldings(context.db, [id], context.clock()), sites, context.clock())
}
