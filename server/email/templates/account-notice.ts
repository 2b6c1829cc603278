import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

export const accountNoticeSchema = z.object({
  about: z.enum(['role-wanted', 'role-given', 'two-people-needed']),
  role: z.string().default(''),
  organisation: z.string(),
})
export type AccountNotice = z.infer<typeof accountNoticeSchema>

const opening: Record<AccountNotice['about'], (role: string) => string[]> = {
  'role-wanted': role => [`Somebody asked that a person be given the role ${role}. It counts only once a second person agrees.`, 'If you still have an account, sign in and look under People. If you know nothing of this, tell the medical director by telephone.'],
  'role-given': role => [`A person was given the role ${role} by one administrator alone, since nobody else could agree.`, 'The ledger says who and when. If you know nothing of this, tell the management by telephone.'],
  'two-people-needed': () => ['Somebody asked for a new password for the account with this address.', 'The account signs or approves, so no link is sent: two people of your clinic ask for it together under People. An administrator was told. If it was not you, nothing has changed.'],
}

/** A notice about an account; it names nobody and holds no link. */
export function accountNotice(data: AccountNotice, appOrigin: string): MailText {
  return mailText(`Accounts of ${data.organisation}`, [...opening[data.about](data.role), `${data.organisation}, ${appOrigin}`])
}
