import * as z from 'zod'
import { mailText, type MailPart, type MailText } from './mail-text'

/** How long a report can be collected by the link of its mail. */
export const collectionDays = 30

/** Nothing about the patient: the number is ours and means nothing to anybody else. */
export const reportReadySchema = z.object({
  reportNumber: z.string(),
  version: z.number().int(),
  /** How this version came about; 'final' is the first. */
  status: z.enum(['final', 'appended', 'amended', 'corrected', 'entered-in-error']),
  organisation: z.string(),
  siteName: z.string(),
  sitePhone: z.string(),
  acknowledgeToken: z.string(),
  method: z.enum(['encrypted-pdf', 'collection-link']).default('encrypted-pdf'),
})
export type ReportReady = z.infer<typeof reportReadySchema>

const opening: Record<ReportReady['status'], string> = {
  'final': 'A nerve conduction report is ready for one of your patients.',
  'appended': 'A nerve conduction report that you received has an addition.',
  'amended': 'A nerve conduction report that you received was amended.',
  'corrected': 'A nerve conduction report that you received was corrected.',
  'entered-in-error': 'A nerve conduction report that you received was entered in error and is withdrawn. Do not act on it.',
}
const subjects: Record<ReportReady['status'], string> = {
  'final': 'A nerve conduction report is ready',
  'appended': 'A nerve conduction report has an addition',
  'amended': 'A nerve conduction report was amended',
  'corrected': 'A nerve conduction report was corrected',
  'entered-in-error': 'A nerve conduction report is withdrawn',
}

const attached = (link: string): MailPart[] => [
  'It is attached as a PDF that opens with your practice\'s passphrase.',
  { link, label: 'Say that it arrived, or that something looks wrong' },
  'The link opens a page with a button; no sign-in is needed. The button, not the opening, says that it arrived. If you think that something in the report is wrong, say so there: it reaches the neurologist who signed.',
]
const collected = (link: string): MailPart[] => [
  'Collect it under this link with your practice\'s passphrase; nothing is attached.',
  { link, label: 'Collect the report' },
  `The link works for ${collectionDays} days; no sign-in is needed. A button on that page says that the report arrived; if you think that something in it is wrong, say so there: it reaches the neurologist who signed.`,
]

/**
 * The mail that brings a report: neutral words, the number, a link to a page with a button. Opening the link alone
 * acknowledges nothing, since mail scanners open links.
 */
export function reportReady(data: ReportReady, appOrigin: string): MailText {
  const version = data.version > 1 ? `, version ${data.version}` : ''
  const replaces = data.version > 1 ? [`It replaces the earlier version. Keep this one.`] : []
  const link = `${appOrigin}/acknowledge/${encodeURIComponent(data.acknowledgeToken)}`
  const telephone = data.sitePhone ? ` or telephone ${data.sitePhone}` : ''
  return mailText(`${subjects[data.status]} (${data.reportNumber}${version})`, [
    `${opening[data.status]} Reference ${data.reportNumber}${version}.`,
    ...replaces,
    ...data.method === 'encrypted-pdf' ? attached(link) : collected(link),
    `If this is not meant for you: delete it and tell ${data.siteName}${telephone}. If the passphrase is lost, telephone too: a new one is never sent by mail.`,
    `${data.organisation}, ${data.siteName}`,
  ])
}
