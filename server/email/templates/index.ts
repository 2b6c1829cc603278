import type * as z from 'zod'
import { accountLink, accountLinkSchema } from './account-link'
import { accountNotice, accountNoticeSchema } from './account-notice'
import { confirmAddress, confirmAddressSchema } from './confirm-address'
import { linkRenewed, linkRenewedSchema } from './link-renewed'
import { appointment, appointmentSchema } from './appointment'
import type { MailText } from './mail-text'
import { overdue, overdueSchema } from './overdue'
import { referrerLetter, referrerLetterSchema } from './referrer-letter'
import { reportReady, reportReadySchema } from './report-ready'
import { verifyAddress, verifyAddressSchema } from './verify-address'

interface Template<S extends z.ZodType> { schema: S, render: (data: z.output<S>, appOrigin: string) => MailText }
const template = <S extends z.ZodType>(schema: S, render: Template<S>['render']): Template<S> => ({ schema, render })

/** Every mail of the program: its data and its words. A new mail is a file here and a line in this list. */
export const mailTemplates = {
  'overdue': template(overdueSchema, overdue),
  'appointment': template(appointmentSchema, appointment),
  'referrer-letter': template(referrerLetterSchema, referrerLetter),
  'report-ready': template(reportReadySchema, reportReady),
  'link-renewed': template(linkRenewedSchema, linkRenewed),
  'verify-address': template(verifyAddressSchema, verifyAddress),
  'account-link': template(accountLinkSchema, accountLink),
  'account-notice': template(accountNoticeSchema, accountNotice),
  'confirm-address': template(confirmAddressSchema, confirmAddress),
} as const

export type MailTemplate = keyof typeof mailTemplates
export type MailData<T extends MailTemplate> = z.input<(typeof mailTemplates)[T]['schema']>

/**
 * The words of a queued mail.
 * @throws Error when the template is unknown or its data has another shape
 */
export function renderMail(name: string, data: unknown, appOrigin: string): MailText {
  if (!Object.hasOwn(mailTemplates, name)) throw new Error('No mail template has this name.')
  const found = mailTemplates[name as MailTemplate] as unknown as Template<z.ZodType>
  return found.render(found.schema.parse(data), new URL(appOrigin).origin)
}

export type { MailText } from './mail-text'
