import type { StimulationSite, Technique } from '#shared/catalogue/types'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { Side } from '#shared/schemas/common'
import type { LimbTemperature, Run, RunRow, Study } from '#shared/schemas/study'
import { columnsOf } from './grid-columns'
import type { EntryPlace } from './grid-entry'

export const sideWord: Record<Side, string> = { right: 'RIGHT', left: 'LEFT' }
export const otherSide = (side: Side): Side => side === 'right' ? 'left' : 'right'

/** A technique that left the catalogue still has its rows: they are shown by their ids. */
export function techniqueFor(id: string): Technique {
  return techniqueOf(id) ?? { id, kind: 'sensory', nerve: id, label: id, recording: { id: '', label: '', short: '' }, limb: 'arm', roots: '', sites: [], quantities: [] }
}

export const siteIn = (technique: Technique, id: string): StimulationSite | undefined => technique.sites.find(site => site.id === id)

/** The fixed distance of the method for a row, in mm: to the recording electrode, or over one step of a short-segment study. */
export function standardDistance(technique: Technique, row: RunRow, rowIndex: number): number | undefined {
  const site = siteIn(technique, row.site)
  if (site?.aside) return undefined
  if (technique.kind === 'motor' && rowIndex > 0) return technique.shortSegments ? site?.standardDistanceMm : undefined
  return site?.standardDistanceMm ?? technique.standardDistanceMm
}

export const rowLabel = (technique: Technique, row: RunRow) => siteIn(technique, row.site)?.label ?? row.site

/** What the head of the first column says. */
export function rowHead(technique: Technique): string {
  if (technique.kind === 'repetitive') return 'train'
  return technique.kind === 'needle' ? 'muscle' : 'stimulated at'
}

/** What the range of a distance in this row depends on. */
export function entryPlace(technique: Technique, run: Run, rowIndex: number): EntryPlace {
  const row = run.rows[rowIndex]
  const site = row && siteIn(technique, row.site)
  const isSegment = technique.kind === 'motor' && rowIndex > 0 && !site?.aside
  const segmentLabel = isSegment ? `${rowLabel(technique, run.rows[rowIndex - 1]!)} to ${site?.label ?? row?.site}` : `${site?.label ?? ''} to the recording electrode`
  return { site, segmentLabel }
}

/** "abductor pollicis brevis · 80 mm · antidromic": what stands small behind the title. */
export function runDetails(technique: Technique, run: Run): string {
  const recording = technique.label.includes(technique.recording.label) ? '' : technique.recording.label
  const distance = technique.standardDistanceMm ? `${technique.standardDistanceMm} mm` : ''
  const needle = technique.kind === 'needle' ? `${technique.nerve}, ${technique.roots}` : ''
  return [recording, needle, run.direction ?? technique.direction, distance, run.shortSegments ? 'short segments' : ''].filter(Boolean).join(' · ')
}

/** Limb segments that are studied and have no temperature yet, RIGHT first: without one a limb counts as cold. */
export function limbsWithoutTemperature(study: Pick<Study, 'runs' | 'temperatures'>): { segment: LimbTemperature['segment'], side: Side }[] {
  const wanted = new Map<string, { segment: LimbTemperature['segment'], side: Side }>()
  for (const run of study.runs) {
    const segment = techniqueFor(run.technique).temperatureSegment
    const has = study.temperatures.some(reading => reading.segment === segment && reading.side === run.side)
    if (segment && !run.notDoneBecause && !has) wanted.set(`${run.side}-${segment}`, { segment, side: run.side })
  }
  return [...wanted.values()].sort((a, b) => b.side.localeCompare(a.side))
}

const limbWords = { arm: 'ARM', leg: 'LEG', face: 'FACE', trunk: 'TRUNK' } as const

export interface GroupedRun { run: Run, technique: Technique }
/** The runs of one limb and side: what was stimulated, then the needle examination, which is one sheet of its own. */
export interface RunGroup { id: string, title: string, runs: GroupedRun[], stimulated: GroupedRun[], needled: GroupedRun[] }

function groupOf(id: string, all: GroupedRun[]): RunGroup {
  const stimulated = all.filter(({ technique }) => technique.kind !== 'needle')
  const needled = all.filter(({ technique }) => technique.kind === 'needle')
  const [first] = all
  return { id, title: first ? `${sideWord[first.run.side]} ${limbWords[first.technique.limb]}` : '', runs: [...stimulated, ...needled], stimulated, needled }
}

const isSameGroup = (a: RunGroup, b: RunGroup) => a.runs.length === b.runs.length && a.runs.every(({ run }, index) => run === b.runs[index]?.run)

/**
 * Runs by limb and side, in the order in which they were laid out; RIGHT stands before LEFT.
 *
 * @param before the groups as they were: a group in which nothing changed keeps its object, so that it is not drawn again
 */
export function groupRuns(runs: Run[], before: readonly RunGroup[] = []): RunGroup[] {
  const all = runs.map(run => ({ run, technique: techniqueFor(run.technique) }))
  const ids = [...new Set(all.map(({ run, technique }) => `${run.side}-${technique.limb}`))]
  const rank = (id: string) => ['arm', 'leg', 'face', 'trunk'].findIndex(limb => id.endsWith(limb)) * 2 + (id.startsWith('right') ? 0 : 1)
  return ids.sort((a, b) => rank(a) - rank(b)).map((id) => {
    const group = groupOf(id, all.filter(({ run, technique }) => `${run.side}-${technique.limb}` === id))
    const known = before.find(each => each.id === id)
    return known && isSameGroup(known, group) ? known : group
  })
}

/** @example cellWords(study, rowId, 'latencyMs') // => 'RIGHT median motor, elbow, latency' */
export function cellWords(study: Study, rowId: string, field: string): string {
  const run = study.runs.find(each => each.rows.some(row => row.id === rowId))
  const row = run?.rows.find(each => each.id === rowId)
  if (!run || !row) return field
  const technique = techniqueFor(run.technique)
  const column = columnsOf(technique, run, true).find(each => each.field === field)?.label ?? field.replace(/(Ms|Mv|Uv|Mm|Ma)$/, '')
  return `${sideWord[run.side]} ${technique.label}, ${rowLabel(technique, row)}, ${column}`
}
