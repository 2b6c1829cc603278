import type { ReferenceTable } from '#shared/schemas/reference-table'
import aanemNdtf2016 from './aanem-ndtf-2016.json'
import buschbacherPrimaryStudies from './buschbacher-primary-studies.json'
import indiaAdult from './india-adult.json'
import lateResponses from './late-responses.json'
import { loadTable } from './load-table'
import otherAdultPopulations from './other-adult-populations.json'
import otherNervesAndTests from './other-nerves-and-tests.json'
import paediatric from './paediatric.json'
import prestonShapiroAdult from './preston-shapiro-adult.json'

/** Every shipped set, parsed once and frozen. None of them judges anything until a named person adopts it at a site. */
export const referenceTables: readonly ReferenceTable[] = Object.freeze([
  aanemNdtf2016,
  buschbacherPrimaryStudies,
  prestonShapiroAdult,
  indiaAdult,
  otherAdultPopulations,
  otherNervesAndTests,
  lateResponses,
  paediatric,
].map(loadTable))

/**
 * The set with this id; its newest version unless one is asked for. Undefined when there is none.
 *
 * @example
 * referenceTable('aanem-ndtf-2016')?.version // => 1
 */
export function referenceTable(id: string, version?: number): ReferenceTable | undefined {
  return referenceTables
    .filter(table => table.id === id && (version === undefined || table.version === version))
    .toSorted((a, b) => b.version - a.version)[0]
}
