import type { Assessment, Policy } from '../calculations/types'
import type { ReadingView, ReportDraft } from '../schemas/report'
import type { Study } from '../schemas/study'

/** The study as the reader wants it judged: each choice carries its reason, which is printed. */
export function withReaderChoices({ study, policy }: { study: Study, policy: Policy }, draft: Pick<ReportDraft, 'interpretCold' | 'leaveOutEntrapmentSites'>): { study: Study, policy: Policy } {
  const reasonOf = (runId: string) => draft.interpretCold.find(item => item.runId === runId)?.reason
  const runs = study.runs.map((run) => {
    const reason = reasonOf(run.id)
    return reason ? { ...run, interpretColdBecause: reason } : run
  })
  return { study: { ...study, runs }, policy: { ...policy, leaveOutEntrapmentSites: policy.leaveOutEntrapmentSites || draft.leaveOutEntrapmentSites } }
}

/**
 * The sentences as made from the rows now, with the reader's wording where one was edited. An edited sentence whose
 * numbers changed is kept and marked, and so is one whose row is gone: nothing that a person wrote vanishes.
 */
export function mergeFindings(assessment: Pick<Assessment, 'findings'>, draft: Pick<ReportDraft, 'editedFindings'>): ReadingView['findings'] {
  const made = assessment.findings.map((finding) => {
    const edited = draft.editedFindings.find(item => item.key === finding.key)
    const { key, runIds, text } = finding
    if (!edited) return { key, runIds, text, edited: false, needsReview: false, left: false }
    return { key, runIds, text: edited.text, edited: edited.text !== text, needsReview: edited.fingerprint !== finding.fingerprint, left: edited.left }
  })
  const orphans = draft.editedFindings.filter(item => !item.left && !assessment.findings.some(finding => finding.key === item.key))
    .map(item => ({ key: item.key, runIds: [], text: item.text, edited: true, needsReview: true, left: false }))
  return [...made, ...orphans]
}
