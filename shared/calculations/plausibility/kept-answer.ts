import { techniqueOf } from '../../catalogue/nerves'
import type { KeptCheck, Run, RunRow, Study } from '../../schemas/study'
import type { Remark } from '../types'

type Cells = NonNullable<KeptCheck['cells']>

/** Questions that compare one cell with its own range; all others rest on several values. */
const ofOneCell = ['unusual', 'distance-unusual', 'short-segment', 'latency-too-short', 'h-range', 'latency-unusual']
/** Questions about a run that rest on the other side, or on the other recording, of the same technique too. */
const ofOneTechnique = ['sides-identical', 'recorded-twice']

function cellsOfRow(row: RunRow): [string, Cells[string]][] {
  return [
    ...Object.entries(row.values).map(([field, entry]): [string, Cells[string]] => [`${row.id}/${field}`, entry]),
    ...(row.series ? [[`${row.id}/series`, row.series] as [string, Cells[string]]] : []),
    ...Object.entries(row.ordinals ?? {}).map(([id, step]): [string, Cells[string]] => [`${row.id}/ordinal:${id}`, step]),
  ]
}

/** The runs whose values a question rests on: its own, those of its limb, or, where it speaks of the study, all. */
function runsBehind(study: Study, { code, runId }: Pick<Remark, 'code' | 'runId'>): Run[] {
  const run = study.runs.find(one => one.id === runId)
  if (run && ofOneTechnique.includes(code)) return study.runs.filter(one => one.technique === run.technique)
  if (run) return [run]
  const [side, segment] = code.startsWith('temperature-missing/') ? code.slice('temperature-missing/'.length).split('-') : []
  return side ? study.runs.filter(one => one.side === side && techniqueOf(one.technique)?.temperatureSegment === segment) : study.runs
}

/**
 * The cells that a question rests on, with what they hold now: what an answer to it is bound to.
 *
 * @example
 * cellsBehind(study, remark) // => { 'row-1/distanceMm': 530 }
 */
export function cellsBehind(study: Study, remark: Pick<Remark, 'code' | 'runId' | 'rowId' | 'quantity'>): Cells {
  const all = Object.fromEntries(runsBehind(study, remark).flatMap(run => run.rows).flatMap(cellsOfRow))
  const own = `${remark.rowId}/${remark.quantity}`
  const only = all[own]
  return ofOneCell.includes(remark.code) && only !== undefined ? { [own]: only } : all
}

/**
 * Do all cells that an answer rests on still hold what they held? A cell that was filled since takes nothing away.
 *
 * @example
 * holdsStill({ 'row-1/distanceMm': 530 }, cellsOf(study)) // => false once 520 stands there
 */
export function holdsStill(bound: Cells, now: ReadonlyMap<string, Cells[string]>): boolean {
  return Object.entries(bound).every(([key, entry]) => {
    const stands = now.get(key)
    return stands === entry || JSON.stringify(stands) === JSON.stringify(entry)
  })
}

/**
 * The study without the answers whose values were changed: they do not come back with the old value, the question is
 * asked again.
 */
export function withoutFallenAnswers(study: Study): Study {
  if (study.keptChecks.length === 0) return study
  const now = cellsOf(study)
  const standing = study.keptChecks.filter(({ cells }) => !cells || holdsStill(cells, now))
  return standing.length === study.keptChecks.length ? study : { ...study, keptChecks: standing }
}

/** Every cell of the study by its key; built only where there are answers to compare with. */
export function cellsOf(study: Study): ReadonlyMap<string, Cells[string]> {
  return new Map(study.runs.flatMap(run => run.rows).flatMap(cellsOfRow))
}
