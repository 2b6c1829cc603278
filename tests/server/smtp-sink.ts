import type { AddressInfo, Socket } from 'node:net'
import { SMTPServer } from 'smtp-server'

/** What the server does with the next mails. */
export type Behaviour = 'ok' | 'hang-up-before-data' | 'later' | 'never' | 'unknown-recipient' | 'later-after-data' | 'never-after-data' | 'hang-up-in-data' | 'hang-up-after-data'

const answers: Partial<Record<Behaviour, { stage: 'rcpt' | 'data', code: number }>> = {
  'later': { stage: 'rcpt', code: 451 }, 'never': { stage: 'rcpt', code: 554 }, 'unknown-recipient': { stage: 'rcpt', code: 550 },
  'later-after-data': { stage: 'data', code: 452 }, 'never-after-data': { stage: 'data', code: 552 },
}
const refusal = (code: number) => Object.assign(new Error('refused as the test wishes'), { responseCode: code })

/** A mail server on the loopback with a behaviour that tests choose. `taken` holds what it said 250 to, and what it swallowed. */
export async function smtpSink(port = 0, offersTls = false) {
  const state = { behaviour: 'ok' as Behaviour, taken: [] as Buffer[], swallowed: [] as Buffer[], connections: 0 }
  const sockets = new Set<Socket>()
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: offersTls ? ['AUTH'] : ['STARTTLS', 'AUTH'],
    logger: false,
    onConnect: (_session, done) => {
      state.connections++
      done()
    },
    onRcptTo: (_address, _session, done) => {
      const answer = answers[state.behaviour]
      if (state.behaviour === 'hang-up-before-data') for (const socket of sockets) socket.destroy()
      else done(answer?.stage === 'rcpt' ? refusal(answer.code) : null)
    },
    onData: (stream, _session, done) => {
      const chunks: Buffer[] = []
      stream.on('data', (chunk: Buffer) => {
        chunks.push(chunk)
        if (state.behaviour === 'hang-up-in-data') for (const socket of sockets) socket.destroy()
      })
      stream.on('end', () => {
        const message = Buffer.concat(chunks)
        if (state.behaviour === 'hang-up-after-data') {
          state.swallowed.push(message)
          for (const socket of sockets) socket.destroy()
          return
        }
        const answer = answers[state.behaviour]
        if (answer?.stage === 'data') return done(refusal(answer.code))
        state.taken.push(message)
        done()
      })
    },
  })
  server.on('error', () => undefined)
  server.server.on('connection', (socket: Socket) => {
    sockets.add(socket)
    socket.on('error', () => undefined)
    socket.on('close', () => sockets.delete(socket))
  })
  await new Promise<void>(resolve => server.listen(port, '127.0.0.1', resolve))
  return {
    state,
    url: `smtp://127.0.0.1:${(server.server.address() as AddressInfo).port}`,
    close: () => new Promise<void>((resolve) => {
      for (const socket of sockets) socket.destroy()
      server.close(() => resolve())
    }),
  }
}
