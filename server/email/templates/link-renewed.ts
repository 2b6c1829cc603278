import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

/** Nothing about the patient: the number is ours and means nothing to anybody else. */
export const linkRenewedSchema = z.object({
  reportNumber: z.string(),
  version: z.number().int(),
  /** The last day, ISO. */
  until: z.iso.date(),
  organisation: z.string(),
  siteName: z.string(),
  sitePhone: z.string(),
  acknowledgeToken: z.string(),
})

/** The mail that says that a collection link works again; it opens with the practice's passphrase, which never comes by mail. */
export function linkRenewed(data: z.infer<typeof linkRenewedSchema>, appOrigin: string): MailText {
  const version = data.version > 1 ? `, version ${data.version}` : ''
  const telephone = data.sitePhone ? ` or telephone ${data.sitePhone}` : ''
  return mailText(`The link of a nerve conduction report works again (${data.reportNumber}${version})`, [
    `The report ${data.reportNumber}${version} can be collected again until ${data.until}, with your practice's passphrase; nothing is attached.`,
    { link: `${appOrigin}/acknowledge/${encodeURIComponent(data.acknowledgeToken)}`, label: 'Collect the report' },
    `If you did not ask for this: tell ${data.siteName}${telephone}.`,
    `${data.organisation}, ${data.siteName}`,
  ])
}
