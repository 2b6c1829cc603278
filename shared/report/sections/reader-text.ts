import { heading, paragraph, type Block, type ReportSection } from '../blocks'
import type { ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'
import { formatMoment } from '../dates'
import type { ReportSnapshot } from '../../schemas/report'

const paragraphs = (text: string): Block[] => text.split(/\n+/).map(line => line.trim()).filter(Boolean).map(line => paragraph(line))
const part = (title: string, id: string, text: string): Block[] => text.trim() ? [heading(2, title, id), ...paragraphs(text)] : []

/** How the numbers fit the question. */
export const correlation: ReportSection<ReportSource> = {
  id: 'correlation',
  blocks: ({ snapshot }) => part(reportWords(snapshot.language).correlation, 'correlation', snapshot.draft.correlation),
}

/** What this study cannot say; at least "none identified". */
export const limitations: ReportSection<ReportSource> = {
  id: 'limitations',
  blocks: ({ snapshot }) => {
    const text = snapshot.draft.limitations.map(line => /[.!?]$/.test(line) ? line : `${line}.`).join(' ')
    return part(reportWords(snapshot.language).limitations, 'limitations', text)
  },
}

export const recommendation: ReportSection<ReportSource> = {
  id: 'recommendation',
  blocks: ({ snapshot }) => part(reportWords(snapshot.language).recommendation, 'recommendation', snapshot.draft.recommendation),
}

/** A finding that needed prompt contact: who was told, when, how, and whether it was read back. */
export const promptContact: ReportSection<ReportSource> = {
  id: 'prompt-contact',
  blocks: ({ snapshot }) => {
    const contact = snapshot.draft.promptContact
    if (!contact) return []
    const words = reportWords(snapshot.language)
    const at = Number.isNaN(Date.parse(contact.at)) ? contact.at : formatMoment(contact.at, snapshot.site.timeZone, words.days)
    const text = [`${contact.who}, ${at}, ${contact.means}, ${contact.readBack ? words.reading.readBack : words.reading.notReadBack}.`, contact.note].filter(Boolean).join(' ')
    return part(words.promptContact, 'prompt-contact', text)
  },
}

function referredHistory({ referral }: ReportSnapshot, words: ReportWords): string {
  const onset = referral.onset ? words.reading.onset(referral.onset) : ''
  return [referral.symptoms.replace(/\.$/, ''), onset].filter(Boolean).join('; ')
}

function historyParagraphs(snapshot: ReportSnapshot): Block[] {
  const words = reportWords(snapshot.language)
  const line = (who: string, text: string) => text.trim() ? [paragraph([{ text: `${who}: `, faint: true }, { text: text.trim() }])] : []
  return [
    ...line(`${words.history}, ${words.inSentence(words.historyAsReferred)}`, referredHistory(snapshot, words)),
    ...line(`${words.history}, ${words.inSentence(words.byReader)}`, snapshot.draft.history),
    ...line(`${words.examination}, ${words.inSentence(words.historyAsReferred)}`, snapshot.referral.examination),
    ...line(`${words.examination}, ${words.inSentence(words.byReader)}`, snapshot.draft.examination),
  ]
}

/** History and examination, said apart by who gave them. */
export const history: ReportSection<ReportSource> = {
  id: 'history',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const lines = historyParagraphs(snapshot)
    return lines.length > 0 ? [heading(2, `${words.history}, ${words.inSentence(words.examination)}`, 'history'), ...lines] : []
  },
}

/** Does the sentence rest on something that is flagged? Edited and unknown ones count: they are never folded away. */
function standsAlone({ key, edited }: ReportSnapshot['findings'][number], { runs, comparisons }: ReportSnapshot['assessment']): boolean {
  const results = key.startsWith('run/') ? runs.find(run => key === `run/${run.runId}`)?.results : comparisons.find(comparison => key.endsWith(`/${comparison.id}`) && (!comparison.side || key.includes(`/${comparison.side}/`)))?.results
  return edited || !results || results.some(result => result.flagged || result.verdict.kind === 'cold')
}

/**
 * The numbers in words, each sentence tied to its runs: first those on something outside, one by one, then the others
 * together.
 */
export const findings: ReportSection<ReportSource> = {
  id: 'findings',
  blocks: ({ snapshot }) => {
    const words = reportWords(snapshot.language)
    const alone = snapshot.findings.filter(finding => standsAlone(finding, snapshot.assessment))
    const together = snapshot.findings.filter(finding => !alone.includes(finding))
    const sentences = alone.map(finding => paragraph(finding.text, 'plain', finding.runIds))
    const rest = together.length > 0 ? [paragraph(together.map(finding => finding.text).join(' '), 'plain', [...new Set(together.flatMap(finding => finding.runIds))])] : []
    const said = [...sentences, ...rest]
    return [heading(2, words.findings, 'findings'), ...(said.length > 0 ? said : [paragraph(words.noFindings)])]
  },
}
