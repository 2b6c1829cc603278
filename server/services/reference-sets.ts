import { referenceTable, referenceTables } from '#reference-tables/index'
import { loadTable } from '#reference-tables/load-table'
import type { Database, Trx } from '#server/database/connection'
import type { AdoptedSet } from '#shared/calculations/types'
import type { ReferenceTable } from '#shared/schemas/reference-table'

/** Imported sets never change, so what was parsed once stays; per text, since ids are given by people. */
const parsed = new Map<string, ReferenceTable>()

function parse(json: string): ReferenceTable {
  const known = parsed.get(json)
  if (known) return known
  const table = loadTable(JSON.parse(json))
  parsed.set(json, table)
  return table
}

/** A set by id and version, shipped or imported; its newest version unless one is asked for. */
export async function referenceSet(db: Database | Trx, id: string, version?: number): Promise<ReferenceTable | undefined> {
  const shipped = referenceTable(id, version)
  if (shipped) return shipped
  const row = await db.selectFrom('ownSet').select('tableJson').where('setId', '=', id).$if(version !== undefined, query => query.where('version', '=', version ?? 0)).orderBy('version', 'desc').executeTakeFirst()
  return row && parse(row.tableJson)
}

/** Every set there is, shipped ones first, each imported version by itself. */
export async function allReferenceSets(db: Database): Promise<{ table: ReferenceTable, importedBy: string | null, importedAt: string | null }[]> {
  const own = await db.selectFrom('ownSet').innerJoin('user', 'user.id', 'ownSet.importedBy').select(['tableJson', 'user.name as importedBy', 'importedAt']).orderBy('setId').orderBy('version', 'desc').execute()
  return [...referenceTables.map(table => ({ table, importedBy: null, importedAt: null })), ...own.map(({ tableJson, ...row }) => ({ table: parse(tableJson), ...row }))]
}

/** The adopted sets themselves, in their order; a set that is not known here any more is left out and so gives no limit. */
export async function tablesOf(db: Database | Trx, { adopted }: { adopted: readonly Pick<AdoptedSet, 'setId' | 'version'>[] }): Promise<ReferenceTable[]> {
  const tables = []
  for (const { setId, version } of adopted) tables.push(await referenceSet(db, setId, version))
  return tables.filter(table => table !== undefined)
}
