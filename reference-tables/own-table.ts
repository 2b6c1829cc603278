import { anyQuantity } from '#shared/catalogue/computed-quantities'
import { nerveLabelOf, type OwnSetColumn, type OwnSetHead } from '#shared/schemas/own-set'
import type { LimitRow, ReferenceTable } from '#shared/schemas/reference-table'
import { subgroupWords } from '#shared/calculations/limit-words'

/** A complaint about one cell of an imported table; row 1 is the head. */
export interface CellRemark { strength: 'stop' | 'check', row: number, column: string, message: string }

type Record = Partial<globalThis.Record<string, string>>
export interface OwnTable { table: ReferenceTable, remarks: CellRemark[], /** row id to line of the file */ lineOf: Map<string, number> }

/**
 * A laboratory's own table from the lines of its file. What cannot be read is a complaint by line and column, and the
 * cell is left out; nothing is guessed or converted.
 *
 * @param records one object per line, keyed by the head of the file (`ownSetColumns`)
 * @example ownTable(head, [{ technique: 'sural', quantity: 'amplitudeUv', … }]).remarks // => []
 */
export function ownTable(head: OwnSetHead & { version: number, date: string }, records: readonly Record[]): OwnTable {
  const remarks: CellRemark[] = []
  const lineOf = new Map<string, number>()
  const rows = records.map((record, index) => {
    const line = index + 2
    const id = `${head.id}-${String(index + 1).padStart(3, '0')}`
    lineOf.set(id, line)
    return rowOf(id, head, reader(record, line, remarks))
  })
  const { changeNote, date, lowerPercentile, upperPercentile, handMinimumC, footMinimumC, citation, population, technique, title, id, version } = head
  const table: ReferenceTable = {
    id, version, title, citation, doi: null, population, technique,
    declared: { lowerPercentile, upperPercentile, words: declaredWords(lowerPercentile, upperPercentile) },
    minimumTemperatureC: { hand: handMinimumC, foot: footMinimumC }, changes: [{ version, date, what: changeNote }], rows,
  }
  return { table, remarks, lineOf }
}

function declaredWords(lower: number | null, upper: number | null): string {
  const parts = [lower === null ? '' : `the ${lower}th percentile below`, upper === null ? '' : `the ${upper}th percentile above`].filter(Boolean)
  return parts.length ? `Limits are ${parts.join(' and ')}.` : 'Limits are cut-offs as the laboratory states them; no percentile is stated.'
}

interface Cells { text: (column: OwnSetColumn) => string, number: (column: OwnSetColumn) => number | null, oneOf: <T extends string>(column: OwnSetColumn, choices: readonly T[]) => T | null }

function reader(record: Record, row: number, remarks: CellRemark[]): Cells {
  const stop = (column: string, message: string) => void remarks.push({ strength: 'stop', row, column, message })
  const text = (column: OwnSetColumn) => (record[column] ?? '').trim()
  return {
    text,
    number: (column) => {
      const words = text(column).replace(',', '.')
      if (words === '') return null
      if (/^-?\d+(\.\d+)?$/.test(words)) return Number(words)
      stop(column, `"${text(column)}" is no number. Enter the number alone, in the unit of its column.`)
      return null
    },
    oneOf: (column, choices) => {
      const words = text(column).toLowerCase()
      if (words === '') return null
      const found = choices.find(choice => choice === words)
      if (!found) stop(column, `"${text(column)}" is none of ${choices.join(', ')}.`)
      return found ?? null
    },
  }
}

function rowOf(id: string, head: OwnSetHead, cells: Cells): LimitRow {
  const quantity = cells.text('quantity') || null
  const bands = {
    ageMinYears: cells.number('age_min'), ageMaxYears: cells.number('age_max'), ageMaxExclusive: false, sex: cells.oneOf('sex', ['female', 'male']),
    heightMinCm: cells.number('height_min_cm'), heightMaxCm: cells.number('height_max_cm'), bmiMin: cells.number('bmi_min'), bmiMax: cells.number('bmi_max'),
  }
  const bound = cells.oneOf('bound', ['upper', 'lower'])
  const percentile = bound === 'upper' ? head.upperPercentile : head.lowerPercentile
  const technique = cells.text('technique') || null
  return {
    id, technique, quantity, at: cells.text('at') || null, unit: cells.text('unit').replace('\u03BC', '\u00B5').replace(/^uV$/, 'µV'), bound, use: 'limit',
    kind: percentile === null ? 'cut-off' : 'percentile', value: cells.number('value'), percentile, scale: 'raw',
    source: { nerve: nerveLabelOf(technique ?? ''), studyType: 'own', site: null, recordingSite: null, quantity: anyQuantity(quantity ?? '')?.label ?? quantity ?? '', locator: cells.text('locator') || 'own table' },
    direction: cells.oneOf('direction', ['antidromic', 'orthodromic']), amplitudeDefinition: cells.oneOf('amplitude_definition', ['onset-to-peak', 'peak-to-peak', 'baseline-to-peak']),
    distanceMm: cells.number('distance_mm'), distanceMinMm: null, distanceMaxMm: null, definition: cells.text('definition') || head.title,
    n: cells.number('n'), ...bands, subgroup: subgroupWords(bands), basis: 'read', ...(cells.text('remark') ? { remark: cells.text('remark') } : {}),
  }
}
