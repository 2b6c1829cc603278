import * as z from 'zod'
import { mailText, type MailText } from './mail-text'

export const overdueSchema = z.object({
  /** Our own numbers and what to do; no patient. */
  sentence: z.string().min(1),
  path: z.string().startsWith('/'),
})

/** To a person of the clinic: something waits too long. The subject says no more than that. */
export function overdue({ sentence, path }: z.infer<typeof overdueSchema>, appOrigin: string): MailText {
  return mailText('Something waits for you in Orthodrome', [
    sentence,
    { link: `${appOrigin}${path}`, label: 'Open your tasks' },
    'This mail comes once for each thing. The task stays on your first page until it is settled.',
  ])
}
