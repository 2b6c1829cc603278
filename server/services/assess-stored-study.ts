import type { Database } from '#server/database/connection'
import { loadStudy, type StoredStudy } from '#server/database/queries/studies'
import { assessStudy, CALCULATION_VERSION } from '#shared/calculations/assess-study'
import type { Assessment } from '#shared/calculations/types'
import { DomainError } from '#shared/errors'
import type { ReferenceTable } from '#shared/schemas/reference-table'
import { canonicalJson, sha256Hex } from './canonical-json'
import { tablesOf } from './reference-sets'

export interface AssessedStudy extends StoredStudy {
  /** The adopted sets, in their order. */
  tables: ReferenceTable[]
  assessment: Assessment
  /** SHA-256 over all that the assessment came from: changes when, and only when, one of its inputs does. */
  fingerprint: string
}

/**
 * The authoritative assessment of a stored study.
 * @throws DomainError 'not-found'
 */
export async function assessStoredStudy(context: { db: Database }, studyId: string): Promise<AssessedStudy> {
  const stored = await loadStudy(context.db, studyId)
  if (!stored) throw new DomainError('not-found')
  const { study, policy } = stored
  const tables = await tablesOf(context.db, policy)
  return { ...stored, tables, assessment: assessStudy(study, tables, policy), fingerprint: fingerprintOf(stored, tables) }
}

function fingerprintOf({ study, policy }: StoredStudy, tables: ReferenceTable[]): string {
  const sets = tables.map(({ id, version }) => ({ id, version }))
  return sha256Hex(canonicalJson({ study, policy, sets, calculationVersion: CALCULATION_VERSION }))
}
