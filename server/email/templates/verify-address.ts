import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

export const verifyAddressSchema = z.object({
  /** As it is read out: two groups with a dash. */
  code: z.string().min(8),
  hours: z.number().int(),
  organisation: z.string(),
  siteName: z.string(),
  sitePhone: z.string(),
})
export type VerifyAddress = z.infer<typeof verifyAddressSchema>

/** The mail that proves a mailbox: the code stands in the text and never in the subject; it opens nothing by itself. */
export function verifyAddress(data: VerifyAddress): MailText {
  const telephone = data.sitePhone ? ` You can also call ${data.sitePhone}.` : ''
  return mailText(`Your e-mail address with ${data.organisation}`, [
    `${data.siteName} wants to send nerve conduction reports for your patients to this address and checks first that it is yours.`,
    `Code: ${data.code}`,
    `Read it out when ${data.siteName} telephones.${telephone} It works once, for ${data.hours} hours. It is asked for by telephone only; do not answer this mail.`,
    'If you expect no reports from us, delete this mail: nothing is sent to an address that was not confirmed.',
    `${data.organisation}, ${data.siteName}`,
  ])
}
