import type { Database } from '#server/database/connection'
import { adoptedSets } from '#server/database/queries/policy'
import { loadStudy } from '#server/database/queries/studies'
import { assessStudy } from '#shared/calculations/assess-study'
import type { AdoptedSet, Assessment, Result } from '#shared/calculations/types'
import type { WhatIfAnswer, WhatIfChange } from '#shared/schemas/shelf'
import { referenceSet, tablesOf } from '../reference-sets'

export interface WhatIf { siteId: string, setId: string, setVersion: number, insteadOf: string | null, count: number, today: string }

/**
 * Judges the latest studies of a site twice: by the sets in use there today, and as if the asked set were in use as well
 * or in the place of another one. Nothing is stored; signed reports keep what they were signed with.
 * @returns every value whose verdict would change
 */
export async function whatIf(db: Database, { siteId, setId, setVersion, insteadOf, count, today }: WhatIf): Promise<WhatIfAnswer> {
  const before = await adoptedSets(db, siteId, today)
  const asked = await referenceSet(db, setId, setVersion)
  if (!asked) return { studies: 0, changes: [] }
  const after = withSet(before, { setId, version: setVersion, adoptedOn: today, adoptedBy: '', verifiedRows: [] }, insteadOf)
  const [tablesBefore, tablesAfter] = [await tablesOf(db, { adopted: before }), await tablesOf(db, { adopted: after })]
  const latest = await db.selectFrom('study').select(['id', 'number']).where('siteId', '=', siteId).where('state', 'in', ['handed-over', 'read']).orderBy('studyDate', 'desc').orderBy('id').limit(count).execute()
  const changes: WhatIfChange[] = []
  for (const { id, number } of latest) {
    const stored = await loadStudy(db, id)
    if (!stored) continue
    const one = assessStudy(stored.study, tablesBefore, { ...stored.policy, adopted: before })
    const other = assessStudy(stored.study, tablesAfter, { ...stored.policy, adopted: after })
    changes.push(...changedVerdicts(one, other).map(change => ({ studyId: id, number, ...change })))
  }
  return { studies: latest.length, changes }
}

/** As adoption would do it: at the end of the order, or in the place of the set that is left out. */
export function withSet(before: readonly AdoptedSet[], added: AdoptedSet, insteadOf: string | null): AdoptedSet[] {
  if (insteadOf === null) return [...before.filter(set => set.setId !== added.setId), added]
  return before.flatMap(set => set.setId === insteadOf ? [added] : set.setId === added.setId ? [] : [set])
}

const resultsOf = (assessment: Assessment): Result[] => [...assessment.runs.flatMap(run => run.results), ...assessment.comparisons.flatMap(comparison => comparison.results)]

function changedVerdicts(one: Assessment, other: Assessment): Omit<WhatIfChange, 'studyId' | 'number'>[] {
  const later = new Map(resultsOf(other).map(result => [result.key, result]))
  return resultsOf(one).flatMap((result) => {
    const then = later.get(result.key)
    if (!then || words(result) === words(then)) return []
    return [{ key: result.key, label: result.label, print: `${result.print} ${result.unit}`.trim(), before: words(result), after: words(then), flagChanges: result.flagged !== then.flagged }]
  })
}

function words({ verdict }: Result): string {
  if (verdict.kind !== 'outside') return verdict.kind.replaceAll('-', ' ')
  return verdict.direction === 'above' ? 'above the limit' : 'below the limit'
}
