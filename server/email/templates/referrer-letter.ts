import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

/** Nothing about the patient: the number is ours, what is asked or advised stands behind the link. */
export const referrerLetterSchema = z.object({
  kind: z.enum(['information', 'advice']),
  number: z.string(),
  token: z.string().min(20),
  days: z.number().int(),
  reminder: z.boolean(),
  organisation: z.string(),
  siteName: z.string(),
  sitePhone: z.string(),
})
export type ReferrerLetterMail = z.infer<typeof referrerLetterSchema>

const words = {
  information: { subject: 'A referral needs information', opening: 'A referral of yours cannot be booked yet because something is missing', label: 'See what is missing and complete it', after: 'It takes about a minute. The referral then goes on by itself.' },
  advice: { subject: 'A referral was declined', opening: 'A referral of yours was declined, with advice', label: 'Read the advice', after: 'Nothing is booked for this referral.' },
} as const

/** The mail to a referring physician whose referral was returned or declined. */
export function referrerLetter(data: ReferrerLetterMail, appOrigin: string): MailText {
  const { subject, opening, label, after } = words[data.kind]
  const telephone = data.sitePhone ? `, telephone ${data.sitePhone}` : ''
  return mailText(`${data.reminder ? 'Reminder: ' : ''}${subject} (${data.number})`, [
    `${opening}. Reference ${data.number}.`,
    { link: `${appOrigin}/complete/${encodeURIComponent(data.token)}`, label },
    `The page asks for the patient's date of birth; no sign-in is needed. The link works for ${data.days} days. ${after}`,
    `If this is not meant for you: delete it and tell ${data.siteName}${telephone}.`,
    `${data.organisation}, ${data.siteName}${telephone}`,
  ])
}
