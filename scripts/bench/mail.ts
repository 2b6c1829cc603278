import { randomUUID } from 'node:crypto'
import type { AddressInfo } from 'node:net'
import { join } from 'node:path'
import nodemailer from 'nodemailer'
import { SMTPServer } from 'smtp-server'
import { composeMail } from '#server/email/compose-mail'
import { renderMail } from '#server/email/templates/index'
import { SmtpTransport } from '#server/email/transport'
import { systemActor, type ServiceContext } from '#server/services/context'
import { queueMail } from '#server/services/queue-mail'
import { runOutboxOnce } from '#server/services/run-outbox'
import { openServices } from '#server/utils/open-services'
import { quietLog } from '../settings'
import { against, ms, type Figure } from './measure'

const MAILS = 500
const CONNECTIONS = 5
const data = { reportNumber: 'REP-2026-000001', version: 1, status: 'final' as const, organisation: 'Invented Clinics', siteName: 'North', sitePhone: '+00 55 1234', acknowledgeToken: 'x'.repeat(43), method: 'collection-link' as const }

/** Takes everything and keeps nothing. */
async function startSink() {
  const server = new SMTPServer({ authOptional: true, disabledCommands: ['STARTTLS', 'AUTH'], logger: false, onData: (stream, _session, done) => {
    stream.on('end', () => done())
    stream.resume()
  } })
  await new Promise<void>(resolve => server.listen(0, '127.0.0.1', resolve))
  return { url: `smtp://127.0.0.1:${(server.server.address() as AddressInfo).port}`, close: () => new Promise<void>(resolve => server.close(() => resolve())) }
}

/** 500 mails that are due, through claim, last-byte mark and settlement; every one written to the disk three times. */
async function throughOutbox(context: ServiceContext, transport: SmtpTransport): Promise<number> {
  await context.db.transaction().execute(async (trx) => {
    for (let index = 0; index < MAILS; index++) await queueMail(context, trx, { template: 'report-ready', toAddress: `physician${index}@practice.example`, data })
  })
  const from = performance.now()
  let sent = 0
  while (sent < MAILS) {
    const { accepted, ...failed } = await runOutboxOnce(context, { transport, owner: randomUUID() })
    if (accepted === 0) throw new Error(`No mail left: ${JSON.stringify(failed)}`)
    sent += accepted
  }
  return performance.now() - from
}

/** The same mails, made in the same way, handed to nodemailer's own pool: nothing is written down. */
async function bareLoop(url: string): Promise<number> {
  const { hostname, port } = new URL(url)
  const pool = nodemailer.createTransport({ pool: true, host: hostname, port: Number(port), secure: false, ignoreTLS: true, maxConnections: CONNECTIONS, maxMessages: 100 })
  const from = performance.now()
  await Promise.all(Array.from({ length: MAILS }, async (_, index) => {
    const to = `physician${index}@practice.example`
    const raw = await composeMail({ from: 'Orthodrome <reports@orthodrome.example>', to, messageId: `<${randomUUID()}@orthodrome.example>`, date: new Date(), content: renderMail('report-ready', data, 'http://127.0.0.1:3000') })
    await pool.sendMail({ envelope: { from: 'reports@orthodrome.example', to }, raw })
  }))
  const took = performance.now() - from
  pool.close()
  return took
}

/** The outbox against a bare pooled loop to the same server, by the clock. */
export async function mailFigure(folder: string, rounds: number): Promise<Figure> {
  const sink = await startSink()
  const services = await openServices({ dataDir: join(folder, 'mail'), appOrigin: 'http://127.0.0.1:3000', smtpUrl: sink.url, mailFrom: 'Orthodrome <reports@orthodrome.example>', demonstration: true, idleMinutes: 20, trustProxy: false }, '', quietLog)
  const context = { ...services, actor: systemActor }
  const transport = new SmtpTransport(sink.url)
  try {
    await throughOutbox(context, transport)
    await bareLoop(sink.url)
    const { one, other, ratio } = await against(rounds, () => throughOutbox(context, transport), () => bareLoop(sink.url))
    return { what: `${MAILS} mails, ${CONNECTIONS} connections`, value: `${ms(one)} through the outbox, ${Math.round(MAILS / one * 1000)}/s`, partner: `${ms(other)} bare pooled loop, ${Math.round(MAILS / other * 1000)}/s`, ratio, goal: 3 }
  }
  finally {
    transport.close()
    await services.db.destroy()
    await sink.close()
  }
}
