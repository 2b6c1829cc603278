import type { StimulationSite, Technique } from '#shared/catalogue/types'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { Side } from '#shared/schemas/common'
import type { Run, RunRow } from '#shared/schemas/study'
import type { EntryPlace } from './grid-entry'

export const sideWord: Record<Side, string> = { right: 'RIGHT', left: 'LEFT' }
export const otherSide = (side: Side): Side => side === 'right' ? 'left' : 'right'

/** A technique that left the catalogue still has its rows: they are shown by their ids. */
export function techniqueFor(id: string): Technique {
  return techniqueOf(id) ?? { id, kind: 'sensory', nerve: id, label: id, recording: { id: '', label: '', short: '' }, limb: 'arm', roots: '', sites: [], quantities: [] }
}

export const siteIn = (technique: Technique, id: string): StimulationSite | undefined => technique.sites.find(site => site.id === id)

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

const limbWords = { arm: 'ARM', leg: 'LEG', face: 'FACE', trunk: 'TRUNK' } as const

export interface RunGroup { id: string, title: string, runs: { run: Run, technique: Technique }[] }

/** Runs by limb and side, in the order in which they were laid out; RIGHT stands before LEFT. */
export function groupRuns(runs: Run[]): RunGroup[] {
  const groups = new Map<string, RunGroup>()
  for (const run of runs) {
    const technique = techniqueFor(run.technique)
    const id = `${run.side}-${technique.limb}`
    const group = groups.get(id) ?? { id, title: `${sideWord[run.side]} ${limbWords[technique.limb]}`, runs: [] }
    group.runs.push({ run, technique })
    groups.set(id, group)
  }
  const rank = (id: string) => ['arm', 'leg', 'face', 'trunk'].findIndex(limb => id.endsWith(limb)) * 2 + (id.startsWith('right') ? 0 : 1)
  return [...groups.values()].sort((a, b) => rank(a.id) - rank(b.id))
}
