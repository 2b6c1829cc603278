import MailComposer from 'nodemailer/lib/mail-composer'
import type { MailText } from './templates/mail-text'

export interface OutgoingMail {
  from: string
  to: string
  /** With angle brackets; the same at every attempt, so that a repeat can be recognised. */
  messageId: string
  date: Date
  content: MailText
  attachment?: { filename: string, bytes: Uint8Array, contentType: 'application/pdf' }
}

/** One plain mailbox: no display name, no list, nothing that could end the header line. */
const mailbox = /^[^\s<>,;:"()[\]\\@]+@[^\s<>,;:"()[\]\\@]+\.[^\s<>,;:"()[\]\\@]+$/

/**
 * @throws Error when it is not one plain mailbox: a line break in an address would start a header of its own
 * @example checkMailbox('sam@practice.example') // => 'sam@practice.example'
 */
export function checkMailbox(address: string): string {
  if (address.length > 254 || !mailbox.test(address)) throw new Error('The address is not one plain mailbox.')
  return address
}

const oneLine = (text: string) => text.replace(/[\r\n\0]+/g, ' ')

/**
 * The whole message as bytes, with text and HTML, ready for the SMTP dialogue. `Auto-Submitted` (RFC 3834, section 5)
 * keeps holiday answers from coming back.
 */
export async function composeMail({ from, to, messageId, date, content, attachment }: OutgoingMail): Promise<Buffer> {
  const composer = new MailComposer({
    from: oneLine(from),
    to: checkMailbox(to),
    messageId: oneLine(messageId),
    date,
    subject: oneLine(content.subject),
    text: content.text,
    html: content.html,
    headers: { 'Auto-Submitted': 'auto-generated' },
    ...(content.calendar ? { icalEvent: { method: content.calendar.method, filename: 'appointment.ics', content: content.calendar.text } } : {}),
    attachments: attachment ? [{ filename: oneLine(attachment.filename), content: Buffer.from(attachment.bytes), contentType: attachment.contentType }] : [],
    disableFileAccess: true,
    disableUrlAccess: true,
    newline: '\r\n',
  })
  return await new Promise((resolve, reject) => composer.compile().build((error, message) => error ? reject(error) : resolve(message)))
}
