import type { Trx } from '#server/database/connection'
import { assessStudy } from '#shared/calculations/assess-study'
import type { Correction } from '#shared/report/corrections'
import { inLanguage } from '#shared/report/findings-in'
import { mergeFindings, withReaderChoices } from '#shared/report/reader-choices'
import type { ReportDraft, ReportSnapshot } from '#shared/schemas/report'
import { correctedStudy } from './correct-values'
import { tablesOf } from './reference-sets'

type Judged = Pick<ReportSnapshot, 'study' | 'policy' | 'assessment' | 'findings'>

/**
 * The values of the version before, judged again only where a value or a choice of the reader changed; by the sets of
 * that time, so that a new set never changes what was signed.
 * @throws DomainError 'not-valid' for a correction that cannot be made
 */
export async function reassess(trx: Trx, before: ReportSnapshot, draft: ReportDraft, corrections: readonly Correction[]): Promise<Judged> {
  const same = corrections.length === 0 && JSON.stringify([draft.interpretCold, draft.leaveOutEntrapmentSites]) === JSON.stringify([before.draft.interpretCold, before.draft.leaveOutEntrapmentSites])
  const runs = before.study.runs.map(({ interpretColdBecause: _, ...run }) => run)
  const chosen = same ? before : withReaderChoices({ study: correctedStudy({ ...before.study, runs }, corrections), policy: before.policy }, draft)
  const tables = await tablesOf(trx, before.policy)
  const assessment = same ? before.assessment : inLanguage(before.language, chosen.study, assessStudy(chosen.study, tables, chosen.policy))
  const findings = mergeFindings(assessment, draft).filter(finding => !finding.left).map(({ key, runIds, text, edited }) => ({ key, runIds, text, edited }))
  return { study: chosen.study, policy: chosen.policy, assessment, findings }
}
