import { assessStudy } from '#shared/calculations/assess-study'
import type { Assessment, Policy } from '#shared/calculations/types'
import type { ReferenceTable } from '#shared/schemas/reference-table'
import type { Study } from '#shared/schemas/study'
import { assessmentDifferences } from '../utils/assessment-differences'
import { patchOf, withPatch, type RunsPatch } from '../utils/runs-patch'

/**
 * The assessment beside the page: typing never waits for it. The page says what changed in the study since it last asked;
 * the answer holds what changed since the last answer.
 */
export type ToAssessor
  = | { kind: 'tables', tables: ReferenceTable[] }
    | { kind: 'assess', patch: RunsPatch<Study>, policy: Policy }
    | { kind: 'compare', study: Study, policy: Policy, server: Assessment }
export type FromAssessor
  = | { kind: 'assessed', patch: RunsPatch<Assessment> }
    | { kind: 'compared', differences: string[] }
    | { kind: 'failed' }

let tables: ReferenceTable[] = []
let study: Study | undefined
let last: Assessment | undefined

function assess(patch: RunsPatch<Study>, policy: Policy): FromAssessor {
  study = withPatch(study, patch)
  const fresh = assessStudy(study, tables, policy)
  const changed = patchOf(last, fresh)
  last = fresh
  return { kind: 'assessed', patch: changed }
}

function answer(message: Exclude<ToAssessor, { kind: 'tables' }>): FromAssessor {
  try {
    if (message.kind === 'assess') return assess(message.patch, message.policy)
    return { kind: 'compared', differences: assessmentDifferences(assessStudy(message.study, tables, message.policy), message.server) }
  }
  catch {
    // The page falls back on the server's assessment: the next answer to it is a whole one.
    last = undefined
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
