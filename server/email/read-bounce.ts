import { createHash } from 'node:crypto'
import { simpleParser, type Attachment, type ParsedMail } from 'mailparser'

/** What a message of the bounce mailbox says about one of our mails. */
export type BounceReading
  = | { kind: 'failed', report: FailureReport }
    /** A report that the mail waits or arrived: nothing to do. */
    | { kind: 'other' }
    /** No delivery status report: a holiday answer, or a failure told in words only. */
    | { kind: 'unreadable', id: string }

export interface FailureReport {
  /** The report's own Message-ID, or the hash of its bytes. */
  id: string
  /** How our mail may be found, most certain first: what the report says of it, and where the report was sent. */
  messageIds: string[]
  mailIds: string[]
  /** RFC 3463, for example 5.1.1; '' when the report gives none. */
  status: string
  diagnostic: string
}

/** `Field: value` lines of one group, folded lines joined (RFC 3464, section 2.1). */
function fieldsOf(group: string): Map<string, string> {
  const lines = group.replace(/\r?\n[ \t]+/g, ' ').split(/\r?\n/)
  return new Map(lines.flatMap((line) => {
    const found = /^([A-Za-z-]+):\s*(.*)$/.exec(line)
    return found ? [[found[1]!.toLowerCase(), found[2]!.trim()] as const] : []
  }))
}

const groupsOf = (part: Attachment) => part.content.toString('utf8').split(/\r?\n\s*\r?\n/).filter(group => group.trim()).map(fieldsOf)
const uuids = (text: string) => text.match(/[0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12}/gi)?.map(id => id.toLowerCase()) ?? []

/**
 * Reads a delivery status report (RFC 3464): whether a mail failed for good, which one, and why. A mail is known again by
 * the Message-ID in the returned headers, by the envelope id (RFC 3461), and by the address that the report was sent to
 * when the sender's address holds the id of the mail.
 * @example (await readBounce(bytes)).kind // => 'failed'
 */
export async function readBounce(source: Buffer): Promise<BounceReading> {
  const mail = await simpleParser(source, { keepDeliveryStatus: true, skipImageLinks: true, skipHtmlToText: true, skipTextToHtml: true })
  const id = mail.messageId ?? `sha256:${createHash('sha256').update(source).digest('hex')}`
  const status = mail.attachments.find(part => /^message\/(?:global-)?delivery-status$/.test(part.contentType))
  if (!status) return { kind: 'unreadable', id }
  const groups = groupsOf(status)
  const failed = groups.find(group => group.get('action')?.toLowerCase() === 'failed')
  if (!failed) return { kind: 'other' }
  return { kind: 'failed', report: { id, messageIds: messageIdsOf(mail), mailIds: mailIdsOf(mail, groups), status: /^[245]\.\d{1,3}\.\d{1,3}/.exec(failed.get('status') ?? '')?.[0] ?? '', diagnostic: (failed.get('diagnostic-code') ?? '').slice(0, 300) } }
}

function messageIdsOf(mail: ParsedMail): string[] {
  const returned = mail.attachments.filter(part => /^(?:message\/(?:global|rfc822)|(?:text|message)\/(?:rfc822|global)-headers)$/.test(part.contentType))
  return returned.flatMap(part => /^message-id:\s*(<[^<>\s]+>)/im.exec(part.content.toString('latin1').replace(/\r?\n[ \t]+/g, ' '))?.[1] ?? [])
}

function mailIdsOf(mail: ParsedMail, groups: readonly Map<string, string>[]): string[] {
  const envelope = groups.map(group => group.get('original-envelope-id') ?? '')
  const sentTo = ['to', 'delivered-to', 'x-original-to'].flatMap(name => mail.headerLines.filter(line => line.key === name).map(line => line.line))
  return [...envelope, ...sentTo].flatMap(uuids)
}
