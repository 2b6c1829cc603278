import type { Side } from '../../schemas/common'
import type { KnownRun } from '../study-context'
import type { Remark } from '../types'
import { sideWords } from '../words'

/** Collects remarks; a reason with which one was kept stays with its key. Nothing that cannot be right can be kept. */
export interface RemarkList {
  remarks: Remark[]
  kept: ReadonlyMap<string, string>
}

export type RemarkInput = Omit<Remark, 'key' | 'kept' | 'source'> & { source?: string }

export const COMMON_PRACTICE = 'common practice'
export const OWN_DECISION = 'this project\'s ranges: common practice, wide enough for severe disease'

export function addRemark(list: RemarkList, input: RemarkInput): void {
  const key = [input.code, input.runId, input.rowId, input.quantity].filter(part => part !== undefined).join('/')
  const remark: Remark = { key, source: COMMON_PRACTICE, ...input }
  const kept = list.kept.get(key)
  if (kept !== undefined && remark.strength !== 'stop') remark.kept = kept
  list.remarks.push(remark)
}

/** "RIGHT ulnar motor": how a sentence names a run. */
export function runName({ run, technique }: Pick<KnownRun, 'run' | 'technique'>): string {
  return `${sideWords[run.side]} ${technique?.label ?? run.technique}`
}

export const sideWord = (side: Side) => sideWords[side]
