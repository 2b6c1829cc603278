// A mail server for one machine: takes every mail, sends none on, and shows what it got on a page of its own. A mail can be
// sent back as undeliverable: the report lands in a mailbox that is read through IMAP, as with a real server.
import { createServer } from 'node:http'
import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { SMTPServer } from 'smtp-server'
import { simpleParser } from 'mailparser'
import { TOTP } from 'otpauth'
import { startImapFake } from './imap-fake.mjs'
import { statusReport } from './status-report.mjs'

const escape = text => String(text ?? '').replace(/[&<>"']/g, c => `&#${c.charCodeAt(0)};`)

/**
 * @param {{ smtpPort?: number, pagePort?: number | null, dataDir?: string, behave?: (mail: { n: number, to: string }) => 'ok' | 'later' | 'never' | 'hang' | 'cut' }} options
 * smtpPort 0 takes any free port; pagePort null shows no page; dataDir holds the demo sign-ins to show.
 */
export async function startMailFake({ smtpPort = 0, pagePort = null, dataDir, behave = () => 'ok' } = {}) {
  /** @type {{ id: number, at: Date, raw: Buffer, mail: import('mailparser').ParsedMail, to: string[], sender: string, returned: boolean }[]} */
  const mails = []
  /** Addresses whose mails come back as undeliverable. */
  const bouncing = new Set()
  const bounces = await startImapFake()
  let count = 0
  const returnMail = (one) => {
    bounces.deliver(statusReport({ raw: one.raw, to: one.to[0] ?? '', sender: one.sender }))
    one.returned = true
  }
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    onData(stream, session, done) {
      const chunks = []
      stream.on('data', chunk => chunks.push(chunk))
      stream.on('end', async () => {
        const raw = Buffer.concat(chunks)
        const to = session.envelope.rcptTo.map(r => r.address)
        const answer = behave({ n: count++, to: to[0] ?? '' })
        if (answer === 'later') return done(Object.assign(new Error('Try again later'), { responseCode: 451 }))
        if (answer === 'never') return done(Object.assign(new Error('No such mailbox'), { responseCode: 550 }))
        const keep = async () => {
          const mail = await simpleParser(raw)
          const one = { id: mails.length + 1, at: new Date(), raw, mail, to, sender: session.envelope.mailFrom?.address ?? '', returned: false }
          mails.push(one)
          if (to.some(address => bouncing.has(address.toLowerCase()))) returnMail(one)
        }
        if (answer === 'hang') return
        await keep()
        if (answer === 'cut') return session.id && smtp.connections.forEach(c => c.session.id === session.id && c._socket.destroy())
        done()
      })
    },
  })
  await new Promise((resolve, reject) => {
    smtp.once('error', reject)
    smtp.listen(smtpPort, '127.0.0.1', resolve)
  })
  smtp.on('error', () => {})
  const pages = pagePort === null ? null : await startPages({ mails, bouncing, returnMail }, pagePort, dataDir)
  return {
    mails,
    bouncing,
    returnMail,
    bounces,
    imapUrl: bounces.url,
    port: smtp.server.address().port,
    pagePort: pages?.address().port ?? null,
    close: async () => {
      await new Promise(resolve => smtp.close(resolve))
      await bounces.close()
      pages?.closeAllConnections()
      if (pages) await new Promise(resolve => pages.close(resolve))
    },
  }
}

async function startPages({ mails, bouncing, returnMail }, port, dataDir) {
  const server = createServer((request, response) => {
    const url = new URL(request.url, 'http://127.0.0.1')
    const undeliverable = request.method === 'POST' && url.pathname.match(/^\/mail\/(\d+)\/(return|bounce)$/)
    if (undeliverable && mails[undeliverable[1] - 1]) {
      const one = mails[undeliverable[1] - 1]
      const address = (one.to[0] ?? '').toLowerCase()
      if (undeliverable[2] === 'return' && !one.returned) returnMail(one)
      if (undeliverable[2] === 'bounce' && !bouncing.delete(address)) bouncing.add(address)
      response.writeHead(303, { location: `/mail/${one.id}` })
      return response.end()
    }
    const attachment = url.pathname.match(/^\/mail\/(\d+)\/(\d+)$/)
    const one = url.pathname.match(/^\/mail\/(\d+)$/)
    if (attachment) return sendAttachment(response, mails[attachment[1] - 1]?.mail.attachments[attachment[2] - 1])
    if (url.pathname === '/mails.json') return send(response, 200, 'application/json', JSON.stringify(mails.map(m => ({ id: m.id, at: m.at, to: m.to, subject: m.mail.subject, messageId: m.mail.messageId, attachments: m.mail.attachments.map(a => a.filename) }))))
    if (one && mails[one[1] - 1]) return send(response, 200, 'text/html; charset=utf-8', page('Mail', mailBody(mails[one[1] - 1], bouncing)))
    if (url.pathname === '/') return send(response, 200, 'text/html; charset=utf-8', page('Mail as received', list(mails) + signIns(dataDir)))
    send(response, 404, 'text/html; charset=utf-8', page('Nothing here', '<p>Nothing is at this address. <a href="/">Back to the mails</a></p>'))
  })
  await new Promise((resolve, reject) => {
    server.once('error', reject)
    server.listen(port, '127.0.0.1', resolve)
  })
  return server
}

function send(response, status, type, body) {
  response.writeHead(status, { 'content-type': type, 'cache-control': 'no-store', 'x-content-type-options': 'nosniff', 'content-security-policy': 'default-src \'none\'; style-src \'unsafe-inline\'; frame-ancestors \'none\'' })
  response.end(body)
}

function sendAttachment(response, attachment) {
  if (!attachment) return send(response, 404, 'text/plain', 'No such attachment.')
  response.writeHead(200, { 'content-type': attachment.contentType, 'content-disposition': `attachment; filename="${String(attachment.filename).replace(/[^\w.-]/g, '_')}"`, 'cache-control': 'no-store' })
  response.end(attachment.content)
}

const page = (title, body) => `<!doctype html><html lang="en"><meta charset="utf-8"><meta name="viewport" content="width=device-width,initial-scale=1"><title>${escape(title)} · local mail</title><style>
:root{color-scheme:light dark;--paper:#F6F7F4;--sheet:#fff;--ink:#16252B;--faint:#55666B;--rule:#CBD3D1;--fibre:#0F5C63}
@media(prefers-color-scheme:dark){:root{--paper:#11191C;--sheet:#182327;--ink:#E6ECEA;--faint:#9DB0B3;--rule:#33444A;--fibre:#6FC3C4}}
body{margin:0;background:var(--paper);color:var(--ink);font:15px/1.45 "IBM Plex Sans",system-ui,sans-serif}main{max-width:960px;margin:0 auto;padding:24px}a{color:var(--fibre)}h1{font-size:24px}h2{font-size:18px;margin-top:32px}
.scroll{overflow-x:auto}table{border-collapse:collapse;width:100%;background:var(--sheet);border:1px solid var(--rule)}th,td{text-align:left;padding:6px 10px;border-bottom:1px solid var(--rule);vertical-align:top}th{font-weight:400;color:var(--faint);font-size:13px}
pre{white-space:pre-wrap;background:var(--sheet);border:1px solid var(--rule);padding:12px;font:15px/1.45 inherit;font-family:inherit}.faint{color:var(--faint)}code{font-size:14px}button{font:inherit;padding:6px 14px;border:1px solid var(--fibre);border-radius:2px;background:transparent;color:var(--fibre)}</style>
<main><h1>${escape(title)}</h1>${body}</main></html>`

const list = mails => `<p class="faint">This is a mail server for this machine alone: nothing leaves it. Reload to see new mail.</p>
<div class="scroll"><table><thead><tr><th scope="col">received</th><th scope="col">to</th><th scope="col">subject</th><th scope="col">attachments</th></tr></thead><tbody>${[...mails].reverse().map(m => `<tr><td>${escape(m.at.toISOString().slice(0, 19).replace('T', ' '))}</td><td>${escape(m.to.join(', '))}</td><td><a href="/mail/${m.id}">${escape(m.mail.subject)}</a></td><td>${escape(m.mail.attachments.map(a => a.filename).join(', '))}</td></tr>`).join('') || '<tr><td colspan="4">No mail yet. A signed report arrives here about a minute after signing.</td></tr>'}</tbody></table></div>`

const linked = text => escape(text).replace(/https?:\/\/[^\s&]+/g, url => `<a href="${url}">${url}</a>`)

const mailBody = ({ id, at, to, mail, returned }, bouncing) => `<p><a href="/">All mails</a></p><table><tbody>
<tr><th scope="row">from</th><td>${escape(mail.from?.text)}</td></tr><tr><th scope="row">to</th><td>${escape(to.join(', '))}</td></tr><tr><th scope="row">subject</th><td>${escape(mail.subject)}</td></tr><tr><th scope="row">received</th><td>${escape(at.toISOString())}</td></tr><tr><th scope="row">Message-ID</th><td>${escape(mail.messageId)}</td></tr>
<tr><th scope="row">attachments</th><td>${mail.attachments.map((a, i) => `<a href="/mail/${id}/${i + 1}">${escape(a.filename)}</a> (${Math.round(a.size / 1024)} kB)`).join('<br>') || 'none'}</td></tr></tbody></table><h2>Text</h2><pre>${linked(mail.text)}</pre>${undeliverableForms(id, to[0] ?? '', returned, bouncing)}`

/** How a bounce is tried: this mail comes back, or every mail to its address does. */
const undeliverableForms = (id, address, returned, bouncing) => `<h2>Undeliverable mail</h2><p class="faint">A report that the mail could not be delivered lands in the mailbox of bounces; Dispatch hears of it within seconds.</p>
<form method="post" action="/mail/${id}/return"><p>${returned ? 'This mail was sent back.' : '<button>Send this mail back</button>'}</p></form>
<form method="post" action="/mail/${id}/bounce"><p><button>${bouncing.has(address.toLowerCase()) ? `Take mail to ${escape(address)} again` : `Send every mail to ${escape(address)} back`}</button></p></form>`

/** The demonstration's people and practices: what each would know by heart, and the present code of those with a second factor. */
function signIns(dataDir) {
  const file = dataDir && join(dataDir, 'demo-sign-ins.json')
  if (!file || !existsSync(file)) return ''
  const { people, practices } = JSON.parse(readFileSync(file, 'utf8'))
  const code = secret => secret ? new TOTP({ secret }).generate() : ''
  return `<h2>Demonstration sign-ins (invented people)</h2><p class="faint">Codes change every 30 seconds and work once: reload for the next.</p><div class="scroll"><table><thead><tr><th scope="col">role</th><th scope="col">e-mail</th><th scope="col">password</th><th scope="col">code now</th></tr></thead><tbody>${people.map(p => `<tr><td>${escape(p.role)}</td><td>${escape(p.email)}</td><td><code>${escape(p.password)}</code></td><td><code>${escape(code(p.totpSecret))}</code></td></tr>`).join('')}</tbody></table></div>
<h2>Passphrases that the practices were given</h2><div class="scroll"><table><thead><tr><th scope="col">practice</th><th scope="col">passphrase for the PDF</th></tr></thead><tbody>${practices.map(p => `<tr><td>${escape(p.name)}</td><td><code>${escape(p.passphrase)}</code></td></tr>`).join('')}</tbody></table></div>`
}
