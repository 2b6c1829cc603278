import type { Assessment, ComparisonAssessment, Result, RunAssessment } from '#shared/calculations/types'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { Side } from '#shared/schemas/common'
import type { Study } from '#shared/schemas/study'

/** One line of the sides table: the same quantity on both sides, and the difference where the study has one. */
export interface SidesRow {
  key: string
  label: string
  unit: string
  right: Result | null
  left: Result | null
  difference: Result | null
}

/** One nerve (or one comparison) with its lines. Runs that a warm one repeats stand in a group of their own. */
export interface SidesGroup {
  key: string
  title: string
  superseded: boolean
  right: RunAssessment | null
  left: RunAssessment | null
  rows: SidesRow[]
}

const SIDE_DIFFERENCE = 'side-difference/'

/** Values that are never judged and would only lengthen the table; they stand in the line under the nerve's name. */
const setAside = new Set(['distanceMm', 'stimulusMa'])

/**
 * The sides table: nerve by nerve, RIGHT beside LEFT, as the reader sees it.
 *
 * Runs pair in the order of the study; a run that was repeated warm pairs with the other side's repeated run,
 * never with a run that counts. Nothing is judged here: every verdict comes from the assessment.
 *
 * @example sidesTable(study, assessment)[0]?.rows[0]?.right?.print // => '3.8'
 */
export function sidesTable(study: Study, assessment: Assessment): SidesGroup[] {
  const siteOf = siteByRow(study)
  // Needle findings are steps and not numbers: they have a table of their own.
  const techniques = [...new Set(assessment.runs.map(run => run.technique))].filter(id => techniqueOf(id)?.kind !== 'needle')
  return [
    ...techniques.flatMap(technique => groupsOf(technique, assessment, siteOf)),
    ...comparisonGroups(assessment.comparisons),
  ]
}

function siteByRow(study: Study): Map<string, string> {
  return new Map(study.runs.flatMap(run => run.rows.map(row => [row.id, row.site] as const)))
}

function groupsOf(technique: string, assessment: Assessment, siteOf: Map<string, string>): SidesGroup[] {
  const runs = assessment.runs.filter(run => run.technique === technique)
  const of = (side: Side, superseded: boolean) => runs.filter(run => run.side === side && Boolean(run.supersededBy) === superseded)
  return [false, true].flatMap((superseded) => {
    const [right, left] = [of('right', superseded), of('left', superseded)]
    return Array.from({ length: Math.max(right.length, left.length) }, (_, index) =>
      runGroup(right[index] ?? null, left[index] ?? null, superseded, assessment.comparisons, siteOf))
  })
}

function runGroup(right: RunAssessment | null, left: RunAssessment | null, superseded: boolean, comparisons: ComparisonAssessment[], siteOf: Map<string, string>): SidesGroup {
  const rows = pairRows(right?.results ?? [], left?.results ?? [], result => `${siteOf.get(result.rowId ?? '') ?? ''}/${result.quantity}`)
  const group = { key: `${right?.runId ?? ''}+${left?.runId ?? ''}`, title: nerveTitle((right ?? left)!), superseded, right, left, rows }
  return superseded ? group : { ...group, rows: withDifferences(group, comparisons) }
}

/** "RIGHT median motor, APB" => "Median motor, APB". */
export function nerveTitle(run: Pick<RunAssessment, 'title'>): string {
  const words = run.title.replace(/^(RIGHT|LEFT)\s+/, '')
  return words.charAt(0).toUpperCase() + words.slice(1)
}

function pairRows(right: Result[], left: Result[], keyOf: (result: Result) => string): SidesRow[] {
  const rows = new Map<string, SidesRow>()
  const put = (results: Result[], side: Side) => {
    const seen = new Map<string, number>()
    for (const result of results.filter(each => !setAside.has(each.quantity))) {
      const count = (seen.get(keyOf(result)) ?? 0) + 1
      seen.set(keyOf(result), count)
      const key = count === 1 ? keyOf(result) : `${keyOf(result)}#${count}`
      const row = rows.get(key) ?? { key, label: result.label, unit: result.unit, right: null, left: null, difference: null }
      rows.set(key, { ...row, [side]: result })
    }
  }
  put(right, 'right')
  put(left, 'left')
  return [...rows.values()]
}

/** What late responses, reflexes and trains are recorded for: never folded away, whether a set has a limit or not. */
const alwaysShown = new Set(['persistencePercent', 'chronodispersionMs', 'hmRatio', 'decrementPercent', 'incrementPercent', 'r2DifferenceMs', 'stepLatencyMs'])

/** Computed and judged by no limit: folded away until asked for, so that the judged numbers are read first. */
export function isFurther(row: SidesRow): boolean {
  const results = [row.right, row.left].filter(result => result !== null)
  return results.every(result => !alwaysShown.has(result.quantity) && !result.typed && !result.flagged && result.verdict.kind === 'none') && row.difference === null
}

/** Side differences stand in the line of the value they compare: `at` of a difference names its quantity. */
function withDifferences(group: SidesGroup, comparisons: ComparisonAssessment[]): SidesRow[] {
  const ids = [group.right?.runId, group.left?.runId].filter(id => id !== undefined)
  const results = comparisons
    .filter(comparison => comparison.id.startsWith(SIDE_DIFFERENCE) && ids.length === 2 && ids.every(id => comparison.runIds.includes(id)))
    .flatMap(comparison => comparison.results)
  const left = new Set(results)
  return group.rows.map((row) => {
    const difference = [...left].find(result => comparesRow(result, row)) ?? null
    if (difference) left.delete(difference)
    return { ...row, difference }
  })
}

function comparesRow(difference: Result, row: SidesRow): boolean {
  const value = row.right ?? row.left
  if (!value || !row.right || !row.left) return false
  return difference.at === value.quantity && (value.quantity !== 'velocityMps' || difference.label.startsWith(`${value.label},`))
}

function comparisonGroups(comparisons: ComparisonAssessment[]): SidesGroup[] {
  const titles = new Map<string, ComparisonAssessment[]>()
  for (const comparison of comparisons.filter(each => !each.id.startsWith(SIDE_DIFFERENCE))) {
    const title = comparisonTitle(comparison)
    titles.set(title, [...titles.get(title) ?? [], comparison])
  }
  return [...titles].map(([title, list]) => {
    const of = (side: Side) => list.filter(each => (each.side ?? 'right') === side).flatMap(each => each.results)
    return { key: `compare/${title}`, title, superseded: false, right: null, left: null, rows: pairRows(of('right'), of('left'), result => `${result.label}/${result.quantity}`) }
  })
}

function comparisonTitle(comparison: ComparisonAssessment): string {
  return nerveTitle({ title: comparison.title.replace(/,?\s*\b(RIGHT|LEFT)\b\s*$/, '') })
}
