import { subgroupWords } from '#shared/calculations/limit-words'
import { techniqueOf } from '#shared/catalogue/nerves'
import { roundForPrint } from '#shared/calculations/round-for-print'
import type { LimitRow } from '#shared/schemas/reference-table'

/** Words of one row of a set, as the shelf shows them. */
export function techniqueWords(row: LimitRow): string {
  return (row.technique && techniqueOf(row.technique)?.label) ?? `${row.source.nerve} ${row.source.studyType}`
}

/** "peak latency at wrist, antidromic, 140 mm". */
export function placeWords(row: LimitRow): string {
  const at = row.source.site ? `, ${row.source.site}` : ''
  return [`${row.source.quantity}${at}`, row.direction ?? '', row.distanceMm === null ? '' : `${row.distanceMm} mm`].filter(Boolean).join(', ')
}

/**
 * The value as the source gives it: "≤ 4.4 ms", "52 ± 4 m/s, lower limit mean − 2 SD", "intercept 28.5 …".
 *
 * @example valueWords(row) // => '≤ 4 ms'
 */
export function valueWords(row: LimitRow): string {
  const sign = row.bound === 'upper' ? '≤ ' : row.bound === 'lower' ? '≥ ' : ''
  const unit = row.unit ? ` ${row.unit}` : ''
  if (row.value !== null) return `${sign}${row.value}${unit}`
  if (row.mean !== undefined) return `${row.mean}${row.sd === undefined ? '' : ` ± ${row.sd}`}${unit}${row.scale === 'raw' ? '' : ` (${row.scale} scale)`}${shift(row)}`
  if (row.regression) return `${regressionWords(row.regression)}${unit}${shift(row)}`
  return '–'
}

function shift(row: LimitRow): string {
  if (row.bound === null || row.sdMultiple === undefined) return ''
  return `, ${row.bound} limit ${row.bound === 'upper' ? '+' : '−'} ${row.sdMultiple} SD`
}

function regressionWords({ intercept, coefficients, residualSd }: NonNullable<LimitRow['regression']>): string {
  const terms = Object.entries(coefficients).map(([item, value]) => `${value < 0 ? '−' : '+'} ${Math.abs(value)} × ${item}`)
  return `${intercept} ${terms.join(' ')}${residualSd === undefined ? '' : `, residual SD ${roundForPrint(residualSd, 2)}`}`
}

/** Whom a row is for: the source's own words, else the bands. */
export function groupWords(row: LimitRow): string {
  return row.subgroup || subgroupWords(row) || 'everyone'
}

export const basisWords = { 'read': 'read in the source', 'from memory': 'recalled', 'derived': 'derived' } as const
