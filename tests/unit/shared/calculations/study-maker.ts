import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy, type Assessment, type Policy, type Remark, type Result } from '#shared/calculations/types'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { referenceTables } from '#reference-tables'
import { carpalTunnelStudy, ndtfPolicy } from '../../../fixtures/carpal-tunnel-study'

/** Small studies of the invented person of the carpal tunnel fixture, warm hands and feet unless said otherwise. */
export function studyWith(runs: Run[], changes: Partial<Study> = {}): Study {
  const warm = (['hand', 'foot'] as const).flatMap(segment => (['right', 'left'] as const).map(side => ({ id: `${segment}-${side}`, segment, side, celsius: 33, warmed: false })))
  return { ...carpalTunnelStudy(), temperatures: warm, ...changes, runs }
}

export function run(technique: string, side: 'right' | 'left', rows: [site: string, values: RunRow['values'], series?: RunRow['series']][], changes: Partial<Run> = {}): Run {
  const id = changes.id ?? `${side}-${technique}`
  return { id, technique, side, rows: rows.map(([site, values, series], index) => ({ id: `${id}-${index}`, site, values, ...(series && { series }) })), ...changes }
}

export const policyWith = (...ids: string[]): Policy => ({ ...defaultPolicy, adopted: ids.map(setId => ({ setId, version: 1, adoptedOn: '', adoptedBy: '', verifiedRows: [] })) })
export const assess = (study: Study, policy: Policy = ndtfPolicy): Assessment => assessStudy(study, referenceTables, policy)
export const resultsOf = (assessment: Assessment): Result[] => [...assessment.runs, ...assessment.comparisons].flatMap(one => one.results)
export function resultOf(assessment: Assessment, key: string): Result {
  const found = resultsOf(assessment).find(result => result.key === key)
  if (!found) throw new Error(`no result ${key} among ${resultsOf(assessment).map(result => result.key).join(', ')}`)
  return found
}
export const codes = (assessment: Assessment): string[] => assessment.remarks.map(remark => `${remark.strength} ${remark.code}`)
export const remarkOf = (assessment: Assessment, code: string): Remark | undefined => assessment.remarks.find(remark => remark.code === code)
