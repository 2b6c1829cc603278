/** What a template gives: the same in text and HTML. */
export interface MailText { subject: string, text: string, html: string, /** a calendar entry that goes with it */ calendar?: { method: 'REQUEST' | 'CANCEL', text: string } }

const escapeHtml = (text: string) => text.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;')

export type MailPart = string | { link: string, label: string }

/** Paragraphs as plain text and as sober HTML: no picture, no script, nothing fetched from anywhere. */
export function mailText(subject: string, parts: readonly MailPart[], language = 'en'): MailText {
  const text = parts.map(part => typeof part === 'string' ? part : `${part.label}:\n${part.link}`).join('\n\n')
  const paragraphs = parts.map(part => typeof part === 'string'
    ? `<p>${escapeHtml(part)}</p>`
    : `<p><a href="${escapeHtml(part.link)}">${escapeHtml(part.label)}</a></p>`)
  const html = `<!doctype html><html lang="${language}"><head><meta charset="utf-8"><title>${escapeHtml(subject)}</title></head><body style="font-family: sans-serif; color: #16252B; line-height: 1.45">${paragraphs.join('')}</body></html>`
  return { subject, text: `${text}\n`, html }
}
