import type { RunKind } from '../../catalogue/types'
import type { ReportSnapshot } from '../../schemas/report'
import { emptyCell, heading, plainCell, withSides, type ReportSection, type TableBlock, type TextCell } from '../blocks'
import { runTable } from '../run-table'
import { shortRunName, type FrozenRun, type ReportSource } from '../source'
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
  const reason = frozen.run.notDoneBecause?.trim()
  const name: TextCell = { words: withSides(`${words.sides[frozen.run.side]} ${shortRunName(frozen, words)}`), below: reason ? `${words.notExamined}: ${reason}` : frozen.technique.roots }
  return { cells: [name, ...ordinals.map(id => typed[id] ? plainCell(words.say(typed[id])) : emptyCell)], first: true, struck: false, runId: frozen.run.id }
}

/** Every muscle, the ones that were left out with their reason. */
function needleRuns(snapshot: ReportSnapshot): FrozenRun[] {
  return snapshot.assessment.runs.flatMap((assessment) => {
    const run = snapshot.study.runs.find(candidate => candidate.id === assessment.runId)
    const technique = snapshot.techniques.find(candidate => candidate.id === assessment.technique)
    return run && technique?.kind === 'needle' ? [{ run, technique, assessment }] : []
  })
}

/** Needle findings as they were entered: scales in words, nothing computed. */
export const needle: ReportSection<ReportSource> = {
  id: 'needle',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const runs = needleRuns(snapshot)
    const ordinals = runs[0]?.technique.ordinals ?? []
    if (runs.length === 0) return []
    return [heading(2, words.needle, 'needle'), {
      kind: 'table',
      caption: words.needle,
      columns: [{ label: words.columns.nerve, align: 'left', wide: true }, ...ordinals.map(({ label }) => ({ label: words.say(label), align: 'left' as const }))],
      rows: runs.map(run => needleRow(run, ordinals.map(({ id }) => id), words)),
    }]
  },
}
