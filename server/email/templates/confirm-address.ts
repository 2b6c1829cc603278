import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

export const confirmAddressSchema = z.object({ code: z.string().min(8), hours: z.number().int(), organisation: z.string() })
export type ConfirmAddress = z.infer<typeof confirmAddressSchema>

/** The code with which a person proves the own mailbox; it stands in the text and never in the subject. */
export function confirmAddress(data: ConfirmAddress): MailText {
  return mailText(`Your e-mail address with ${data.organisation}`, [
    'Somebody who is signed in entered this address as their own.',
    `Code: ${data.code}`,
    `Type it under Profile. It works once, for ${data.hours} hours.`,
    'If it was not you, delete this mail: without the code nothing changes.',
    data.organisation,
  ])
}
