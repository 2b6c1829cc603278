import { Readable } from 'node:stream'
import SMTPConnection from 'nodemailer/lib/smtp-connection'
import { smtpSettings, type SmtpSettings } from './smtp-options'

/** What is known after an attempt. `because` may quote the server: it is kept in the database, never in the log. */
export type SendOutcome
  = | { kind: 'accepted' }
    /** Certainly not accepted; trying again is safe. */
    | { kind: 'temporary', because: string }
    /** Certainly not accepted, and the server says that it never will be. */
    | { kind: 'permanent', because: string }
    /** The last byte went out and no answer came back: it may have been accepted. */
    | { kind: 'uncertain', because: string }

/** `id` comes back in a delivery status report where the server knows the extension (RFC 3461); it asks for the headers only. */
export interface Envelope { from: string, to: string, id?: string }

export interface MailTransport {
  /** @param beforeLastByte runs after the server opened the message and before its last byte goes out; a failure there ends the attempt */
  send(envelope: Envelope, message: Buffer, beforeLastByte: () => Promise<void>): Promise<SendOutcome>
  close(): void
}

/**
 * The message as a stream that knows how far it got. nodemailer reads it only after the server's "go ahead", and adds
 * the closing dot when it ends: before the end, the server cannot have accepted anything (RFC 5321, section 4.2.5).
 */
class WatchedMessage extends Readable {
  ended = false
  private at = 0

  constructor(private readonly message: Buffer, private readonly beforeLastByte: () => Promise<void>) {
    // One piece at a time, the next only when the socket took the last: so the end comes no sooner than it must.
    super({ highWaterMark: 1 })
    this.once('end', () => this.ended = true)
  }

  override _read(): void {
    if (this.at < this.message.length) {
      this.push(this.message.subarray(this.at, this.at += pieceBytes))
      return
    }
    this.beforeLastByte().then(() => this.push(null), error => this.destroy(error instanceof Error ? error : new Error('unknown')))
  }
}
const pieceBytes = 16_384

interface SmtpFailure { message: string, code?: string, responseCode?: number }

function outcomeOf(failure: SmtpFailure, message: WatchedMessage): SendOutcome {
  const because = failure.message.slice(0, 300)
  const { responseCode } = failure
  if (responseCode && responseCode >= 500 && failure.code !== 'EAUTH' && failure.code !== 'ETLS') return { kind: 'permanent', because }
  if (responseCode && responseCode >= 400) return { kind: 'temporary', because }
  return message.ended ? { kind: 'uncertain', because } : { kind: 'temporary', because }
}

const mailsPerConnection = 100
/** Well below a lease: a server that answers drop by drop must not hold a mail for ever. Tests are less patient. */
export interface Patience { longestAttemptMs: number, socketTimeoutMs: number }
const usualPatience: Patience = { longestAttemptMs: 120_000, socketTimeoutMs: 60_000 }
const idleMs = 20_000

/** Connections are kept and used again: most of a small mail's time is the greeting. */
export class SmtpTransport implements MailTransport {
  private readonly settings: SmtpSettings
  private idle: { connection: SMTPConnection, sent: number, timer: NodeJS.Timeout }[] = []

  constructor(address: string, private readonly patience: Patience = usualPatience) {
    this.settings = { ...smtpSettings(address), socketTimeout: patience.socketTimeoutMs }
  }

  async send(envelope: Envelope, message: Buffer, beforeLastByte: () => Promise<void>): Promise<SendOutcome> {
    const stream = new WatchedMessage(message, beforeLastByte)
    const kept = this.takeIdle()
    let connection: SMTPConnection | undefined = kept?.connection
    const work = async () => {
      connection ??= await this.connect()
      await sendOver(connection, envelope, stream, message.length)
      return connection
    }
    try {
      connection = await within(this.patience.longestAttemptMs, work())
      this.keep(connection, (kept?.sent ?? 0) + 1)
      return { kind: 'accepted' }
    }
    catch (error) {
      connection?.close()
      return outcomeOf(error as SmtpFailure, stream)
    }
  }

  close(): void {
    for (const { connection, timer } of this.idle.splice(0)) {
      clearTimeout(timer)
      connection.quit()
    }
  }

  private takeIdle() {
    const kept = this.idle.pop()
    if (!kept) return undefined
    clearTimeout(kept.timer)
    kept.connection.removeAllListeners('end')
    return kept
  }

  private keep(connection: SMTPConnection, sent: number): void {
    if (sent >= mailsPerConnection) return connection.quit()
    const forget = () => {
      this.idle = this.idle.filter(kept => kept.connection !== connection)
    }
    const timer = setTimeout(() => {
      forget()
      connection.quit()
    }, idleMs).unref()
    connection.once('end', forget)
    this.idle.push({ connection, sent, timer })
  }

  private async connect(): Promise<SMTPConnection> {
    const { credentials, ...options } = this.settings
    const connection = new SMTPConnection(options)
    await settle(connection, done => connection.connect(error => done(error ?? null)))
    if (credentials) await settle(connection, done => connection.login({ credentials, user: credentials.user, pass: credentials.pass }, error => done(error ?? null)))
    return connection
  }
}

async function within<T>(ms: number, work: Promise<T>): Promise<T> {
  let timer: NodeJS.Timeout | undefined
  const late = new Promise<never>((_, reject) => timer = setTimeout(() => reject(new Error(`No end after ${ms / 1000} seconds.`)), ms))
  try {
    return await Promise.race([work, late])
  }
  finally {
    clearTimeout(timer)
  }
}

function sendOver(connection: SMTPConnection, envelope: Envelope, stream: Readable, size: number): Promise<unknown> {
  const dsn = envelope.id ? { id: envelope.id, return: 'HDRS', notify: ['FAILURE', 'DELAY'] } : undefined
  return settle(connection, done => connection.send({ from: envelope.from, to: envelope.to, size, ...dsn ? { dsn } : {} } as SMTPConnection.Envelope, stream, error => done(error ?? null)))
}

/** A callback as a promise that also ends when the connection reports an error on its own. */
function settle(connection: SMTPConnection, start: (done: (error: Error | null) => void) => void): Promise<undefined> {
  return new Promise((resolve, reject) => {
    const failed = (error: Error) => reject(error)
    connection.once('error', failed)
    start((error) => {
      connection.removeListener('error', failed)
      // A late error of a finished step must not end the process.
      if (connection.listenerCount('error') === 0) connection.on('error', () => undefined)
      if (error) reject(error)
      else resolve(undefined)
    })
  })
}
