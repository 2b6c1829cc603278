import type { LimitRow } from '../schemas/reference-table'
import type { AppliedLimit } from './types'

/**
 * Where a set has no sensory velocity limit, the upper limit of the onset latency at the set's fixed distance stands for
 * it: lower velocity limit (m/s) = distance (mm) / onset latency limit (ms).
 *
 * Basis: derived, this project's rule. It is one measurement in two dresses, so it is never counted twice.
 * 140 mm and 3.3 ms give 42.4 m/s.
 */
function canStand(row: LimitRow): boolean {
  return row.bound === 'upper' && row.distanceMm !== null && row.value !== null && row.value > 0
}

function toVelocity(limit: AppliedLimit, row: LimitRow): AppliedLimit {
  return {
    ...limit,
    bound: 'lower',
    value: row.distanceMm! / limit.value,
    unit: 'm/s',
    percentile: limit.percentile === null ? null : 100 - limit.percentile,
    basis: limit.basis === 'from memory' ? 'from memory' : 'derived',
    derivation: `from onset latency ${limit.value} ms at ${row.distanceMm} mm`,
  }
}

export const derivedVelocityRow = { canStand, toVelocity }
