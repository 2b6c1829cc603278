import type { Block, ReportSection } from './blocks'
import type { ReportSource } from './source'
import { changes } from './sections/changes'
import { comparisons, derived } from './sections/comparisons'
import { identity } from './sections/identity'
import { impression } from './sections/impression'
import { limits, method } from './sections/method'
import { questions } from './sections/questions'
import { correlation, findings, history, limitations, promptContact, recommendation } from './sections/reader-text'
import { blink, hReflex, late, mixed, motor, needle, repetitive, sensory } from './sections/run-tables'
import { disclaimer, signature, versions } from './sections/signature'
import { travel } from './sections/travel'
import { withdrawn } from './sections/withdrawn'

/**
 * The order of a report: a clinical decision, so a list. The answer comes first: who, what was asked, the impression;
 * then what it rests on.
 */
export const reportSections: readonly ReportSection<ReportSource>[] = [
  identity, changes,
  impression, correlation, limitations, recommendation, promptContact,
  history, findings,
  motor, sensory, mixed, late, hReflex, repetitive, blink, comparisons, derived, needle,
  travel,
  method, limits, questions,
  signature, disclaimer, versions,
]

/** A report entered in error shows whom it was about, that it is withdrawn, and who withdrew it: no result, no text. */
export const withdrawnSections: readonly ReportSection<ReportSource>[] = [identity, withdrawn, signature, disclaimer, versions]

/**
 * The whole report as blocks, for the page and the PDF alike.
 *
 * @example reportBlocks({ snapshot, sha256, auditHead, preliminary: false, versions }).map(part => part.id)
 */
export function reportBlocks(source: ReportSource): { id: string, blocks: Block[] }[] {
  const sections = source.snapshot.status === 'entered-in-error' ? withdrawnSections : reportSections
  return sections.map(section => ({ id: section.id, blocks: section.blocks(source) })).filter(part => part.blocks.length > 0)
}

export type { Block, ReportSection } from './blocks'
export type { ReportSource, VersionLine } from './source'
