import { adoptionsAt, rowChecksOf, type AdoptionView } from '#server/database/queries/adoptions'
import { DomainError } from '#shared/errors'
import type { ReferenceTable } from '#shared/schemas/reference-table'
import type { RowCheckView, ShelfSet } from '#shared/schemas/shelf'
import type { ServiceContext } from './context'
import { allReferenceSets, referenceSet } from './reference-sets'

/** The shelf, with the sites (of those the person may see) where each set is proposed, in use, or was. */
export async function listSets({ db, clock }: ServiceContext, siteIds: readonly string[]): Promise<ShelfSet[]> {
  const adoptions = await adoptionsAt(db, siteIds, clock().toISOString().slice(0, 10))
  const checks = await db.selectFrom('rowCheck').select(['setId', 'setVersion']).select(eb => eb.fn.countAll<number>().as('n')).groupBy(['setId', 'setVersion']).execute()
  return (await allReferenceSets(db)).map(({ table: set, importedBy, importedAt }) => ({
    importedBy, importedAt,
    id: set.id, version: set.version, title: set.title, citation: set.citation, population: set.population, rows: set.rows.length,
    limitRows: set.rows.filter(row => row.use === 'limit').length,
    recalledRows: set.rows.filter(row => row.basis === 'from memory').length,
    checkedRows: checks.find(check => check.setId === set.id && check.setVersion === set.version)?.n ?? 0,
    adoptedAt: adoptions.filter(adoption => adoption.setId === set.id && adoption.setVersion === set.version).map(adoptedAt),
  }))
}

const adoptedAt = ({ setId: _id, setVersion: _version, ...adoption }: AdoptionView) => adoption

/**
 * One set as it is shipped, with who compared which recalled row with the paper.
 * @throws DomainError 'not-found'
 */
export async function viewSet({ db }: ServiceContext, { id, version }: { id: string, version?: number }): Promise<ReferenceTable & { rowChecks: RowCheckView[] }> {
  const set = await referenceSet(db, id, version)
  if (!set) throw new DomainError('not-found')
  return { ...set, rowChecks: await rowChecksOf(db, set.id, set.version) }
}
