import type { AddressInfo, Socket } from 'node:net'
import { SMTPServer, type SMTPServerDataStream, type SMTPServerSession } from 'smtp-server'
import { Random } from '../demo/random'

/** What the server does with a mail. */
export const misdeeds = ['ok', 'slow', 'refuse-now', 'refuse-for-good', 'refuse-after-data', 'refuse-after-data-for-good', 'hang-at-recipient', 'hang-after-data', 'cut-in-data', 'cut-after-data'] as const
export type Misdeed = (typeof misdeeds)[number]

/** What the server knows of one Message-ID. `accepted`: 250 was written. `swallowed`: it came whole, and no answer was given. */
export interface Seen { accepted: number, swallowed: number }

const refusal = (responseCode: number) => Object.assign(new Error('refused as the test wishes'), { responseCode })
const wait = (ms: number) => new Promise(done => setTimeout(done, ms))

/**
 * A mail server on the loopback that misbehaves at random, the same way for the same seed.
 * @param share how many of a hundred mails meet a misdeed
 */
export async function misbehavingSink(seed: number, share: number) {
  const random = new Random(seed)
  const seen = new Map<string, Seen>()
  const done = Object.fromEntries(misdeeds.map(name => [name, 0])) as Record<Misdeed, number>
  const state = { share, onRecipient: () => {} }
  const chosen = new WeakMap<SMTPServerSession, Misdeed>()
  const sockets = new Map<string, Socket>()
  const choose = (): Misdeed => random.next() * 100 < state.share ? random.pick(misdeeds.slice(1)) : 'ok'
  const cut = (session: SMTPServerSession) => sockets.get(`${session.remoteAddress}:${session.remotePort}`)?.destroy()
  const note = (message: Buffer, what: keyof Seen) => {
    const id = /^Message-ID: (<[^>]+>)/im.exec(message.toString('latin1'))?.[1] ?? 'none'
    const known = seen.get(id) ?? { accepted: 0, swallowed: 0 }
    known[what]++
    seen.set(id, known)
  }

  async function take(stream: SMTPServerDataStream, session: SMTPServerSession, answer: (error?: Error | null) => void): Promise<void> {
    const misdeed = chosen.get(session) ?? 'ok'
    const chunks: Buffer[] = []
    for await (const chunk of stream) {
      chunks.push(chunk as Buffer)
      if (misdeed === 'cut-in-data') return void cut(session)
      if (misdeed === 'slow') await wait(20)
    }
    const message = Buffer.concat(chunks)
    if (misdeed === 'refuse-after-data') return answer(refusal(452))
    if (misdeed === 'refuse-after-data-for-good') return answer(refusal(552))
    if (misdeed === 'hang-after-data' || misdeed === 'cut-after-data') {
      note(message, 'swallowed')
      return misdeed === 'cut-after-data' ? void cut(session) : undefined
    }
    note(message, 'accepted')
    answer()
  }

  const server = new SMTPServer({
    authOptional: true, disabledCommands: ['STARTTLS', 'AUTH'], logger: false,
    onRcptTo: (_address, session, answer) => {
      const misdeed = choose()
      done[misdeed]++
      chosen.set(session, misdeed)
      state.onRecipient()
      if (misdeed === 'refuse-now') answer(refusal(451))
      else if (misdeed === 'refuse-for-good') answer(refusal(550))
      else if (misdeed !== 'hang-at-recipient') answer()
    },
    onData: (stream, session, answer) => void take(stream, session, answer).catch(() => undefined),
  })
  server.on('error', () => undefined)
  server.server.on('connection', (socket: Socket) => {
    const name = `${socket.remoteAddress}:${socket.remotePort}`
    sockets.set(name, socket)
    socket.on('error', () => undefined)
    socket.on('close', () => sockets.delete(name))
  })
  await new Promise<void>(resolve => server.listen(0, '127.0.0.1', resolve))
  return {
    seen, done, state,
    url: `smtp://127.0.0.1:${(server.server.address() as AddressInfo).port}`,
    close: () => new Promise<void>((resolve) => {
      for (const socket of sockets.values()) socket.destroy()
      server.close(() => resolve())
    }),
  }
}
