import { limitRowSchema, type LimitRow, type ReferenceTable } from '#shared/schemas/reference-table'
import { loadTable } from '#reference-tables/load-table'
import type { LimitQuery } from '#shared/calculations/find-limit'
import type { AdoptedSet } from '#shared/calculations/types'

/** Invented rows and tables of a few lines, for tests. */
export function limitRow(part: Partial<LimitRow> = {}): LimitRow {
  return limitRowSchema.parse({
    id: 'row-1', technique: 'median-motor-apb', quantity: 'latencyMs', at: 'wrist', unit: 'ms', bound: 'upper', use: 'limit', kind: 'cut-off', value: 4.4,
    source: { nerve: 'median', studyType: 'motor', site: 'wrist', recordingSite: null, quantity: 'latency', locator: 'invented' },
    definition: 'invented', basis: 'read', ...part,
  })
}

export function rawTable(rows: LimitRow[], part: Partial<ReferenceTable> = {}): unknown {
  return {
    id: 'invented', version: 1, title: 'Invented', citation: 'Invented for tests.', doi: null, population: 'nobody', technique: 'none',
    declared: { lowerPercentile: 3, upperPercentile: 97, words: 'invented' }, minimumTemperatureC: { hand: null, foot: null },
    changes: [{ version: 1, date: '2026-12-01', what: 'First version.' }], rows, ...part,
  }
}

export const tableOf = (rows: LimitRow[], part: Partial<ReferenceTable> = {}): ReferenceTable => loadTable(rawTable(rows, part))

export const adopt = (table: Pick<ReferenceTable, 'id' | 'version'>, part: Partial<AdoptedSet> = {}): AdoptedSet =>
  ({ setId: table.id, version: table.version, adoptedOn: '2026-12-01', adoptedBy: 'Invented Person', verifiedRows: [], ...part })

export const shelfOf = (...tables: ReferenceTable[]) => ({ tables, policy: { adopted: tables.map(table => adopt(table)) } })

type PartialQuery = Partial<Omit<LimitQuery, 'person'>> & { person?: Partial<LimitQuery['person']> }
export function query(part: PartialQuery = {}): LimitQuery {
  return {
    technique: 'median-motor-apb', quantity: 'latencyMs', at: 'wrist', direction: null, amplitudeDefinition: null, distanceMm: 80, ...part,
    person: { ageYears: 52, sexForLimits: 'female', heightCm: 162, bmi: 28.2, ...part.person },
  }
}
