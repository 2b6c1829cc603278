import { techniques } from '../catalogue/nerves'
import type { StimulationSite, Technique } from '../catalogue/types'
import type { Run, RunRow } from '../schemas/study'

/** One row of a run with its place in the catalogue. */
export interface PlacedRow {
  row: RunRow
  site: StimulationSite | undefined
  /** Index in the technique's sites; after all of them when unknown. */
  place: number
  label: string
}

const places = new Map(techniques.map(technique => [technique, new Map(technique.sites.map((site, place) => [site.id, { site, place }]))]))

/**
 * Rows distal to proximal as in the catalogue, whatever the order they were added in.
 *
 * @example
 * // rows added as elbow, wrist
 * placedRows(run, techniqueOf('median-motor-apb')!).map(placed => placed.row.site) // => ['wrist', 'elbow']
 */
export function placedRows(run: Run, technique: Technique): PlacedRow[] {
  const known = places.get(technique)
  const placed = run.rows.map((row): PlacedRow => {
    const found = known?.get(row.site)
    return { row, site: found?.site, place: found?.place ?? technique.sites.length, label: found?.site.label ?? row.site }
  })
  return isInOrder(placed) ? placed : placed.sort((a, b) => a.place - b.place)
}

function isInOrder(placed: readonly PlacedRow[]): boolean {
  for (let index = 1; index < placed.length; index += 1) {
    if ((placed[index] as PlacedRow).place < (placed[index - 1] as PlacedRow).place) return false
  }
  return true
}

const usualIds = new Map(techniques.map(technique => [technique, technique.sites.find(site => site.usual)?.id]))

/** Index of the row that the distal limits are for: the first of the technique's usual sites, else the most distal row. */
export function usualIndex(rows: readonly PlacedRow[], technique: Technique): number {
  const usual = usualIds.get(technique)
  return Math.max(0, rows.findIndex(placed => placed.row.site === usual))
}
