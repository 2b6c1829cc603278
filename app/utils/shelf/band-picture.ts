import { limitValue } from '#shared/calculations/limit-value'
import type { LimitRow } from '#shared/schemas/reference-table'
import { groupWords, placeWords } from './row-words'

export interface BandStep { rowId: string, fromAge: number, toAge: number, value: number, words: string }
export interface BandPicture { key: string, title: string, unit: string, steps: BandStep[], maxAge: number, minValue: number, maxValue: number }

const OLDEST = 100

/**
 * The limits of a set over age, one picture per quantity and bound: how the limit steps from band to band. Rows whose
 * value depends on more than the band (regressions) are not drawn.
 *
 * @example bandPictures(rows)[0]?.steps.map(step => step.value) // => [4, 4.4]
 */
export function bandPictures(rows: readonly LimitRow[]): BandPicture[] {
  const groups = new Map<string, LimitRow[]>()
  for (const row of rows.filter(each => each.use === 'limit' && each.bound !== null)) {
    const key = `${row.technique}|${placeWords(row)}|${row.bound}`
    groups.set(key, [...groups.get(key) ?? [], row])
  }
  return [...groups].map(([key, list]) => pictureOf(key, list)).filter(picture => picture.steps.length > 1)
}

function pictureOf(key: string, rows: readonly LimitRow[]): BandPicture {
  const steps = rows.flatMap(stepOf)
  const values = steps.map(step => step.value)
  const margin = (Math.max(...values) - Math.min(...values)) / 4 || 1
  const [first] = rows
  return {
    key,
    title: first ? `${placeWords(first)}, ${first.bound} limit` : '',
    unit: first?.unit ?? '',
    steps,
    maxAge: Math.max(...steps.map(step => step.toAge), 1),
    minValue: Math.min(...values) - margin,
    maxValue: Math.max(...values) + margin,
  }
}

function stepOf(row: LimitRow): BandStep[] {
  const value = limitValue(row, { ageYears: null, sexForLimits: null, heightCm: null, bmi: null })
  if (value === null || row.kind === 'regression') return []
  const end = row.ageMaxYears === null ? OLDEST : row.ageMaxExclusive ? row.ageMaxYears : Math.floor(row.ageMaxYears) + 1
  return [{ rowId: row.id, fromAge: row.ageMinYears ?? 0, toAge: end, value, words: groupWords(row) }]
}
