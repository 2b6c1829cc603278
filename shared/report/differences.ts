import type { ReportChange, ReportDraft, ReportSnapshot } from '../schemas/report'

type Texts = Pick<ReportDraft, 'history' | 'examination' | 'correlation' | 'recommendation'> & { impression: string, limitations: string, promptContact: string }

/** What the reader wrote, as texts that can be compared. */
function textsOf(draft: ReportDraft): Texts {
  const { history, examination, correlation, recommendation, promptContact } = draft
  return {
    history, examination, correlation, recommendation,
    impression: draft.impression.map(line => [line.words, line.side, line.degree].filter(Boolean).join(' · ')).join('\n'),
    limitations: draft.limitations.join('\n'),
    promptContact: promptContact ? [promptContact.who, promptContact.at, promptContact.means, promptContact.readBack ? 'read back' : '', promptContact.note].filter(Boolean).join(', ') : '',
  }
}

const labels: Record<keyof Texts, string> = { impression: 'Impression', correlation: 'Clinical correlation', limitations: 'Limitations', recommendation: 'Recommendation', promptContact: 'Prompt contact', history: 'History', examination: 'Examination' }

/**
 * What a later version says differently, in the order of the report: the reader's texts, then the findings, sentence by
 * sentence.
 *
 * @example differences(first, second) // => [{ what: 'Impression', before: 'RIGHT …', after: 'LEFT …' }]
 */
export function differences(before: ReportSnapshot, after: ReportSnapshot): ReportChange[] {
  const [old, now] = [textsOf(before.draft), textsOf(after.draft)]
  const texts = (Object.keys(labels) as (keyof Texts)[]).filter(key => old[key] !== now[key]).map(key => ({ what: labels[key], before: old[key], after: now[key] }))
  const keys = [...new Set([...before.findings, ...after.findings].map(finding => finding.key))]
  const textOf = (snapshot: ReportSnapshot, key: string) => snapshot.findings.find(finding => finding.key === key)?.text ?? ''
  const findings = keys.filter(key => textOf(before, key) !== textOf(after, key)).map(key => ({ what: 'Findings', before: textOf(before, key), after: textOf(after, key) }))
  const technical = before.draft.technicalOnly === after.draft.technicalOnly ? [] : [{ what: 'Kind of report', before: kindWords(before), after: kindWords(after) }]
  return [...technical, ...texts, ...findings]
}

const kindWords = ({ draft }: ReportSnapshot) => draft.technicalOnly ? 'technical, without interpretation' : 'with interpretation'

/**
 * Does the new text keep everything that was signed and only add to it? An addition that alters a word is an amendment
 * or a correction (HL7 FHIR R4: "appended" leaves existing content unchanged).
 */
export function onlyAdds(before: ReportDraft, after: ReportDraft): boolean {
  const [old, now] = [textsOf(before), textsOf(after)]
  const kept = (Object.keys(labels) as (keyof Texts)[]).every(key => now[key].startsWith(old[key]))
  return kept && before.technicalOnly === after.technicalOnly && JSON.stringify(before.editedFindings) === JSON.stringify(after.editedFindings) && JSON.stringify(before.interpretCold) === JSON.stringify(after.interpretCold) && before.leaveOutEntrapmentSites === after.leaveOutEntrapmentSites
}
