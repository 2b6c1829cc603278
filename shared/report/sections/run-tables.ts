import type { RunKind } from '../../catalogue/types'
import { emptyCell, heading, plainCell, withSides, type ReportSection, type TableBlock } from '../blocks'
import { runTable } from '../run-table'
import { runsOf, shortRunName, type FrozenRun, type ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'

/** A section that is one table of all runs of a kind. */
function tableOf(kind: RunKind, id: string, title: (words: ReportWords) => string): ReportSection<ReportSource> {
  return {
    id,
    blocks: (source) => {
      const words = reportWords(source.snapshot.language)
      const made = runTable(source, kind, title(words), words)
      return made.length > 0 ? [heading(2, title(words), id), ...made] : []
    },
  }
}

export const motor = tableOf('motor', 'motor', words => words.motor)
export const sensory = tableOf('sensory', 'sensory', words => words.sensory)
export const mixed = tableOf('mixed', 'mixed', words => words.mixed)
export const late = tableOf('f-wave', 'late', words => words.late)
export const hReflex = tableOf('h-reflex', 'h-reflex', words => words.hReflex)
export const repetitive = tableOf('repetitive', 'repetitive', words => words.repetitive)
export const blink = tableOf('blink', 'blink', words => words.blink)

function needleRow(frozen: FrozenRun, ordinals: string[], words: ReportWords): TableBlock['rows'][number] {
  const typed = frozen.run.rows[0]?.ordinals ?? {}
  const name = withSides(`${words.sides[frozen.run.side]} ${shortRunName(frozen)}`)
  return { cells: [{ words: name }, ...ordinals.map(id => typed[id] ? plainCell(typed[id]) : emptyCell)], first: true, struck: false, runId: frozen.run.id }
}

/** Needle findings as they were entered: scales in words, nothing computed. */
export const needle: ReportSection<ReportSource> = {
  id: 'needle',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const runs = runsOf(snapshot, ['needle'])
    const ordinals = runs[0]?.technique.ordinals ?? []
    if (runs.length === 0) return []
    return [heading(2, words.needle, 'needle'), {
      kind: 'table',
      caption: words.needle,
      columns: [{ label: words.columns.nerve, align: 'left', wide: true }, ...ordinals.map(({ label }) => ({ label, align: 'left' as const }))],
      rows: runs.map(run => needleRow(run, ordinals.map(({ id }) => id), words)),
    }]
  },
}
