import { assessStudy } from '#shared/calculations/assess-study'
import type { Assessment, Policy } from '#shared/calculations/types'
import type { ReferenceTable } from '#shared/schemas/reference-table'
import type { Study } from '#shared/schemas/study'
import { assessmentDifferences } from '../utils/assessment-differences'
import { patchOf, type AssessmentPatch } from '../utils/assessment-patch'

/**
 * The assessment beside the page: typing never waits for it. The page says which study stands there now; the answer holds
 * what changed since the last one.
 */
export type ToAssessor
  = | { kind: 'tables', tables: ReferenceTable[] }
    | { kind: 'assess', study: Study, policy: Policy }
    | { kind: 'compare', study: Study, policy: Policy, server: Assessment }
export type FromAssessor
  = | { kind: 'assessed', patch: AssessmentPatch }
    | { kind: 'compared', differences: string[] }
    | { kind: 'failed' }

let tables: ReferenceTable[] = []
let last: Assessment | undefined

function answer(message: Exclude<ToAssessor, { kind: 'tables' }>): FromAssessor {
  try {
    const fresh = assessStudy(message.study, tables, message.policy)
    if (message.kind === 'compare') return { kind: 'compared', differences: assessmentDifferences(fresh, message.server) }
    const patch = patchOf(last, fresh)
    last = fresh
    return { kind: 'assessed', patch }
  }
  catch {
    return { kind: 'failed' }
  }
}

self.onmessage = ({ data }: MessageEvent<ToAssessor>) => {
  if (data.kind === 'tables') {
    tables = data.tables
    last = undefined
  }
  else self.postMessage(answer(data))
}
