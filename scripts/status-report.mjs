// A delivery status report as mail servers send them back (RFC 3464), for a mail that was received here.
import { randomUUID } from 'node:crypto'

/**
 * @param {{ raw: Buffer | string, to: string, sender?: string, action?: 'failed' | 'delayed', status?: string, diagnostic?: string, id?: string }} mail
 * the mail as it arrived, whom it was for, and what the report says of it
 */
export function statusReport({ raw, to, sender = 'reports@orthodrome.example', action = 'failed', status = '5.1.1', diagnostic = 'smtp; 550 5.1.1 no such mailbox', id = `<${randomUUID()}@mail.local>` }) {
  const headers = raw.toString('latin1').split('\r\n\r\n')[0]
  const edge = `edge-${randomUUID()}`
  return [
    'From: Mail Delivery System <mailer-daemon@mail.local>', `To: ${sender}`, `Subject: Undelivered mail`, `Message-ID: ${id}`, `Date: ${new Date().toUTCString()}`, 'Auto-Submitted: auto-replied',
    'MIME-Version: 1.0', `Content-Type: multipart/report; report-type=delivery-status; boundary="${edge}"`, '',
    `--${edge}`, 'Content-Type: text/plain; charset=utf-8', '', `Your mail to ${to} could not be delivered: ${diagnostic}`, '',
    `--${edge}`, 'Content-Type: message/delivery-status', '', 'Reporting-MTA: dns; mail.local', '', `Final-Recipient: rfc822; ${to}`, `Action: ${action}`, `Status: ${status}`, `Diagnostic-Code: ${diagnostic}`, '',
    `--${edge}`, 'Content-Type: text/rfc822-headers', '', headers, '',
    `--${edge}--`, '',
  ].join('\r\n')
}
