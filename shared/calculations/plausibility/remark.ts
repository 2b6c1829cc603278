import type { QuantityId } from '../../catalogue/quantities'
import type { Side } from '../../schemas/common'
import type { KeptCheck, RunRow, Study } from '../../schemas/study'
import type { KnownRun } from '../study-context'
import type { Remark } from '../types'
import { sideWords } from '../words'
import { cellsOf, holdsStill } from './kept-answer'

/**
 * Collects remarks. A reason with which one was kept stays as long as what it answered does: the same words, the same
 * values. Nothing that cannot be right can be kept.
 */
export interface RemarkList {
  remarks: Remark[]
  kept: ReadonlyMap<string, KeptCheck>
}

/** An empty list for this study, with the answers whose values still stand. */
export function remarkList(study: Study): RemarkList {
  const now = study.keptChecks.length > 0 ? cellsOf(study) : new Map<string, never>()
  const standing = study.keptChecks.filter(({ cells }) => !cells || holdsStill(cells, now))
  return { remarks: [], kept: new Map(standing.map(one => [one.key, one])) }
}

export type RemarkInput = Omit<Remark, 'key' | 'kept' | 'source'> & { source?: string }

export const COMMON_PRACTICE = 'common practice'
export const OWN_DECISION = 'this project\'s ranges: common practice, wide enough for severe disease'

export function addRemark(list: RemarkList, input: RemarkInput): void {
  const key = input.code + under(input.runId) + under(input.rowId) + under(input.quantity)
  const remark: Remark = { key, source: COMMON_PRACTICE, ...input }
  const kept = list.kept.get(key)
  const answersThis = kept !== undefined && (kept.sentence === undefined || kept.sentence === remark.sentence)
  if (answersThis && remark.strength !== 'stop') remark.kept = kept.reason
  list.remarks.push(remark)
}

const under = (part: string | undefined) => part === undefined ? '' : `/${part}`

/** "RIGHT ulnar motor": how a sentence names a run. */
export function runName({ run, technique }: Pick<KnownRun, 'run' | 'technique'>): string {
  return `${sideWords[run.side]} ${technique?.label ?? run.technique}`
}

export const sideWord = (side: Side) => sideWords[side]

/** Does the row hold a number besides its distance? */
export function hasResponse({ values }: RunRow): boolean {
  for (const quantity in values) if (quantity !== 'distanceMm' && typeof values[quantity as QuantityId] === 'number') return true
  return false
}
