import type { AppliedLimit, Result, Verdict } from '../../../../shared/calculations/types'

/** Invented limits and results: only their shape matters here. */
export const limit = (bound: 'upper' | 'lower', value: number, unit: string, subgroup = ''): AppliedLimit =>
  ({ bound, value, unit, setId: 'invented', setVersion: 1, setTitle: 'Invented', rowId: 'r1', subgroup, definition: '97th percentile', percentile: 97, basis: 'read', verified: false })

export const outside = (direction: 'above' | 'below', by: AppliedLimit, nearLimit = false): Verdict => ({ kind: 'outside', direction, limit: by, limits: [by], nearLimit })
export const within = (limits: AppliedLimit[], nearLimit = false): Verdict => ({ kind: 'within', limits, nearLimit })

export function result(quantity: string, unit: string, value: number | null, verdict: Verdict, uncertainty?: number): Result {
  return {
    key: `run/row/${quantity}`, runId: 'run', rowId: 'row', side: 'right', quantity, label: quantity, unit, typed: true,
    value: value === null ? { kind: 'absent', absence: 'no-response' } : { kind: 'value', value, uncertainty },
    print: value === null ? 'no response' : String(value),
    printUncertainty: uncertainty ? `± ${uncertainty}` : '',
    verdict, flagged: verdict.kind === 'outside' || verdict.kind === 'absent',
  }
}
