import type { RunAssessment } from '../calculations/types'
import type { RunKind, Technique } from '../catalogue/types'
import type { ReportSnapshot } from '../schemas/report'
import type { Run } from '../schemas/study'
import type { ReportStatus } from '../states'
import type { ReportWords } from './words'

export interface VersionLine { version: number, status: ReportStatus, signedAt: string, signedName: string, reason: string }

/** What the sections are made from: the frozen snapshot and what stands beside it, since a hash cannot stand inside itself. */
export interface ReportSource {
  snapshot: ReportSnapshot
  /** SHA-256 of the snapshot; null while it is not signed. */
  sha256: string | null
  /** The head of the audit trail when it was signed; null while it is not signed. */
  auditHead: string | null
  /** A print before the signature: marked across every page. */
  preliminary: boolean
  /** This version and those before it. */
  versions: VersionLine[]
}

/** A run with all that is known of it, from the frozen copy alone. */
export interface FrozenRun { run: Run, technique: Technique, assessment: RunAssessment }

/** The runs of these kinds in printing order: as the assessment lists them. Runs left out are not among them. */
export function runsOf(snapshot: ReportSnapshot, kinds: readonly RunKind[]): FrozenRun[] {
  return snapshot.assessment.runs.flatMap((assessment) => {
    const run = snapshot.study.runs.find(candidate => candidate.id === assessment.runId)
    const technique = snapshot.techniques.find(candidate => candidate.id === assessment.technique)
    return run && technique && kinds.includes(technique.kind) && !assessment.notDone ? [{ run, technique, assessment }] : []
  })
}

/** "median, APB": the nerve and where it was recorded, as short as a table allows; a nerve that had another name carries it once. */
export function shortRunName({ technique }: FrozenRun, words: ReportWords): string {
  const [before] = technique.label.split(', ')
  const nerve = technique.kind === 'motor' || technique.kind === 'sensory' ? technique.nerve.replaceAll('-', ' ') : before ?? technique.label
  return `${words.tableNerve(nerve)}, ${words.say(technique.recording.short)}`
}

/** A technique with its sites named in the language of the report. */
export function techniqueIn(words: ReportWords, technique: Technique): Technique {
  return { ...technique, sites: technique.sites.map(site => ({ ...site, label: words.say(site.label) })) }
}
