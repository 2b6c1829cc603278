import { SmtpTransport, type MailTransport } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import type { Settings } from './context'

let transport: { address: string, kept: MailTransport } | undefined

/** The one connection pool of this process to the mail server. */
export function outboxTransport({ smtpUrl }: Pick<Settings, 'smtpUrl'>): MailTransport {
  if (transport?.address !== smtpUrl) {
    transport?.kept.close()
    transport = { address: smtpUrl, kept: new SmtpTransport(smtpUrl) }
  }
  return transport.kept
}

/** At the end of the process: no connection and no thread stays behind. */
export async function closeOutbox(): Promise<void> {
  transport?.kept.close()
  transport = undefined
  await closePdfThread()
}
