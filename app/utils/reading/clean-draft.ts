import type { ReportDraft } from '#shared/schemas/report'

/**
 * The draft as it is sent: lines begun and left blank stay on the page and are not stored.
 *
 * @example cleanDraft({ ...draft, limitations: ['none identified', ' '] }).limitations // => ['none identified']
 */
export function cleanDraft(draft: ReportDraft): ReportDraft {
  return {
    ...draft,
    impression: draft.impression.filter(line => line.words.trim() !== ''),
    limitations: draft.limitations.map(text => text.trim()).filter(Boolean),
    resolved: draft.resolved.filter(answer => answer.reason.trim().length >= 3),
    interpretCold: draft.interpretCold.filter(answer => answer.reason.trim().length >= 3),
    promptContact: draft.promptContact && [draft.promptContact.who, draft.promptContact.note].some(text => text.trim()) ? draft.promptContact : null,
  }
}
