import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

export const accountLinkSchema = z.object({
  about: z.enum(['invitation', 'reset']),
  token: z.string().min(20),
  hours: z.number().int(),
  organisation: z.string(),
})
export type AccountLink = z.infer<typeof accountLinkSchema>

/** The mail with which a password is set. The token stands behind the # of the link: it reaches no server log on the way. */
export function accountLink(data: AccountLink, appOrigin: string): MailText {
  const invited = data.about === 'invitation'
  return mailText(invited ? `Your account with ${data.organisation}` : `A new password for your account with ${data.organisation}`, [
    invited ? `${data.organisation} made an account with Orthodrome for this address.` : 'A new password was asked for. Until it is set the present one stays.',
    { link: `${appOrigin}/set-password#${encodeURIComponent(data.token)}`, label: 'Set the password' },
    `The link works once, for ${data.hours} hours.${invited ? '' : ' A second factor that you set up stays as it is.'}`,
    invited ? 'If you expect no account, delete this mail.' : 'If it was not you, delete this mail: nothing has changed.',
    data.organisation,
  ])
}
