import * as z from 'zod'
import { idSchema, sideSchema } from '../schemas/common'
import { entrySchema, type Run, type RunRow, type Study } from '../schemas/study'

/**
 * What a correction changes in the values of a signed study: a cell, the side of a run, or a run that does not belong to
 * it. The signed version keeps what it said; the corrected one is computed from the study as it stands then.
 */
export const correctionSchema = z.discriminatedUnion('kind', [
  z.object({
    kind: z.literal('cell'), runId: idSchema, rowId: idSchema,
    /** A quantity id, `ordinal:<id>`, or `series`. */
    field: z.string().max(60),
    /** null empties the cell. */
    entry: z.union([entrySchema, z.string().max(200), z.array(entrySchema).max(200), z.null()]),
  }),
  z.object({ kind: z.literal('side'), runId: idSchema, side: sideSchema }),
  z.object({ kind: z.literal('remove-run'), runId: idSchema }),
])
export type Correction = z.infer<typeof correctionSchema>
type CellCorrection = Extract<Correction, { kind: 'cell' }>

/** The row with one field replaced, as the database puts a row together from its cells. */
function withCell(row: RunRow, { field, entry }: CellCorrection): RunRow {
  if (field === 'series') {
    const { series: _, ...rest } = row
    return entry === null ? rest : { ...rest, series: entry as RunRow['series'] }
  }
  if (field.startsWith('ordinal:')) return withOrdinal(row, field.slice('ordinal:'.length), entry as string | null)
  const values = Object.fromEntries(Object.entries({ ...row.values, [field]: entry }).filter(([, value]) => value !== null))
  return { ...row, values }
}

function withOrdinal({ ordinals, ...row }: RunRow, id: string, entry: string | null): RunRow {
  const next = Object.fromEntries(Object.entries({ ...ordinals, [id]: entry }).filter((pair): pair is [string, string] => pair[1] !== null))
  return Object.keys(next).length > 0 ? { ...row, ordinals: next } : row
}

function corrected(run: Run, corrections: readonly Correction[]): Run[] {
  const own = corrections.filter(correction => correction.runId === run.id)
  if (own.some(correction => correction.kind === 'remove-run')) return []
  const side = own.findLast(correction => correction.kind === 'side')?.side ?? run.side
  const cells = own.filter(correction => correction.kind === 'cell')
  const rows = run.rows.map(row => cells.filter(cell => cell.rowId === row.id).reduce(withCell, row))
  return [{ ...run, side, rows }]
}

/** @example applyCorrections(study, [{ kind: 'side', runId: 'run-1', side: 'left' }]).runs[0].side // => 'left' */
export function applyCorrections(study: Study, corrections: readonly Correction[]): Study {
  return corrections.length === 0 ? study : { ...study, runs: study.runs.flatMap(run => corrected(run, corrections)) }
}

/** What a cell holds: the entry, the text of a scale, the series, or null. */
export function entryIn(row: RunRow | undefined, field: string): unknown {
  if (!row) return null
  if (field === 'series') return row.series ?? null
  return (field.startsWith('ordinal:') ? row.ordinals?.[field.slice('ordinal:'.length)] : row.values[field as keyof RunRow['values']]) ?? null
}
