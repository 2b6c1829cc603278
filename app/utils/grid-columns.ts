import { quantityOf, type QuantityId } from '#shared/catalogue/quantities'
import type { Technique } from '#shared/catalogue/types'
import type { Run } from '#shared/schemas/study'

/** One column that is typed into. `field` is the name a cell is saved under. */
export type GridColumn
  = | { kind: 'number', field: QuantityId, quantity: QuantityId, label: string, unit: string }
    | { kind: 'ordinal', field: `ordinal:${string}`, label: string, unit: '', choices: readonly string[] }
    | { kind: 'series', field: 'series', quantity: QuantityId, label: string, unit: string }

/** Columns that many laboratories leave blank: shown when wanted or filled. */
const isSeldom = (technique: Technique, id: QuantityId) =>
  (id === 'areaMvMs' && (technique.kind === 'motor' || technique.kind === 'repetitive')) || id === 'stimulusMa' || (id === 'durationMs' && technique.kind !== 'motor')

const isFilled = (run: Run, id: QuantityId) => run.rows.some(row => row.values[id] !== undefined)

function seriesColumn(technique: Technique): GridColumn[] {
  if (technique.kind === 'f-wave') return [{ kind: 'series', field: 'series', quantity: 'minimumLatencyMs', label: 'single latencies', unit: 'ms' }]
  if (technique.kind === 'repetitive') return [{ kind: 'series', field: 'series', quantity: 'amplitudeMv', label: 'single amplitudes', unit: 'mV' }]
  return []
}

/**
 * The typed columns of a run, in the order of the catalogue.
 *
 * @param all show the columns that are seldom used too
 * @example columnsOf(technique, run, false).map(column => column.label) // => ['latency', 'amplitude', 'duration', 'distance']
 */
export function columnsOf(technique: Technique, run: Run, all: boolean): GridColumn[] {
  const ids = technique.quantities.filter(id => all || !isSeldom(technique, id) || isFilled(run, id))
  const key = `${technique.id}:${ids.join()}`
  const known = made.get(key)
  if (known) return known
  const columns = makeColumns(technique, ids)
  made.set(key, columns)
  return columns
}

/** The same columns are the same object, so that a row is not drawn again for them. They hold words of the catalogue only. */
const made = new Map<string, GridColumn[]>()

function makeColumns(technique: Technique, ids: readonly QuantityId[]): GridColumn[] {
  const numbers = ids
    .map((id): GridColumn => ({ kind: 'number', field: id, quantity: id, label: quantityOf(id).label, unit: quantityOf(id).unit }))
  const ordinals = (technique.ordinals ?? []).map((scale): GridColumn => ({ kind: 'ordinal', field: `ordinal:${scale.id}`, label: scale.label, unit: '', choices: scale.choices }))
  return [...numbers, ...seriesColumn(technique), ...ordinals]
}
