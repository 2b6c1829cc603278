import { findLimit, type FoundLimit, type LimitPerson, type LimitShelf } from '#shared/calculations/find-limit'
import type { LimitRow } from '#shared/schemas/reference-table'

/** What one quantity of a technique is judged by, for one person. */
export interface ApplicableLimit { key: string, quantity: string, at: string | null, label: string, found: FoundLimit }

type Place = Pick<LimitRow, 'quantity' | 'at' | 'direction' | 'amplitudeDefinition' | 'distanceMm' | 'distanceMinMm' | 'source' | 'unit'>

/**
 * Every limit that would apply to one person for one technique, asked of the same function that judges studies: one
 * line per quantity, site and technique of recording that the adopted sets know.
 *
 * @example applicableLimits(shelf, 'sural', { ageYears: 52, sexForLimits: 'male', heightCm: 178, bmi: null })
 */
export function applicableLimits(shelf: LimitShelf, technique: string, person: LimitPerson): ApplicableLimit[] {
  const places = new Map<string, Place>()
  for (const table of shelf.tables) {
    for (const row of table.rows.filter(each => each.use === 'limit' && each.technique === technique && each.quantity !== null)) {
      const key = [row.quantity, row.at, row.direction, row.amplitudeDefinition, row.distanceMm ?? row.distanceMinMm].join('|')
      if (!places.has(key)) places.set(key, row)
    }
  }
  return [...places].map(([key, row]) => ({
    key,
    quantity: row.quantity ?? '',
    at: row.at,
    label: placeWords(row),
    found: findLimit(shelf, { technique, quantity: row.quantity ?? '', at: row.at, direction: row.direction, amplitudeDefinition: row.amplitudeDefinition, distanceMm: row.distanceMm ?? row.distanceMinMm, person }),
  }))
}

/** "peak latency at wrist, antidromic, 140 mm". */
function placeWords(row: Place): string {
  const at = row.at ? ` at ${row.at.replaceAll('-', ' ')}` : ''
  return [`${row.source.quantity}${at}`, row.direction ?? '', row.amplitudeDefinition?.replaceAll('-', ' ') ?? '', row.distanceMm === null ? '' : `${row.distanceMm} mm`].filter(Boolean).join(', ')
}
