import { heading, paragraph, type Block, type ReportSection } from '../blocks'
import { formatMoment, shortFingerprint } from '../dates'
import type { ReportSource } from '../source'
import { reportWords, type ReportWords } from '../words'

/**
 * Printed name, date and time, and meaning stand together on screen and paper (21 CFR 11.50(a) and (b)), with the
 * version and the fingerprint that ties them to this content (21 CFR 11.70).
 */
function signedBlock({ snapshot, sha256, auditHead }: ReportSource, words: ReportWords): Block[] {
  const { name, credentials, meaning, at, timeZone } = snapshot.signature
  const who = [name, credentials].filter(Boolean).join(', ')
  const prints = [sha256 && `${words.fingerprint} ${shortFingerprint(sha256)}`, auditHead && `${words.auditHead} ${shortFingerprint(auditHead)}`]
  return [
    paragraph([{ text: `${words.signedBy} `, strong: true }, { text: words.signedLine(who, formatMoment(at, timeZone, words.days), words.say(meaning)) }]),
    ...snapshot.draftedBy ? [paragraph(`${words.draftedBy} ${snapshot.draftedBy}.`, 'faint')] : [],
    paragraph([`${snapshot.number}, ${words.version(snapshot.version, words.status[snapshot.status])}`, ...prints].filter(Boolean).join(' · '), 'faint'),
  ]
}

export const signature: ReportSection<ReportSource> = {
  id: 'signature',
  blocks: (source) => {
    const words = reportWords(source.snapshot.language)
    return [heading(2, words.signature, 'signature'), ...(source.preliminary ? [paragraph(words.notSigned)] : signedBlock(source, words))]
  },
}

/** Every version up to this one: none is ever removed. A first version has no list. */
export const versions: ReportSection<ReportSource> = {
  id: 'versions',
  blocks: ({ snapshot, versions: lines }) => {
    const words = reportWords(snapshot.language)
    if (lines.length < 2) return []
    return [heading(2, words.versions, 'versions'), ...lines.map((line) => {
      const status = words.status[line.status as keyof typeof words.status] ?? line.status
      const reason = line.reason ? `. ${words.changeReason}: ${line.reason}` : ''
      return paragraph(`${words.version(line.version, status)} · ${line.signedName}, ${formatMoment(line.signedAt, snapshot.site.timeZone, words.days)}${reason}`, 'faint')
    })]
  },
}

/**
 * The organisation's own wording; it can be changed and not removed. In another language: its wording in that language,
 * else the program's in that language with the organisation's after it, as it was written.
 */
export function disclaimerIn(words: ReportWords, own: string, translated?: string): string {
  if (words.language === 'en') return own
  if (translated) return translated
  return own === reportWords('en').disclaimerText ? words.disclaimerText : `${words.disclaimerText} ${own}`
}

export const disclaimer: ReportSection<ReportSource> = {
  id: 'disclaimer',
  blocks: ({ snapshot }) => [paragraph(disclaimerIn(reportWords(snapshot.language), snapshot.organisation.disclaimer, snapshot.organisation.disclaimerTranslated), 'faint')],
}
