import { Worker } from 'node:worker_threads'
import type { ReportSource } from '#shared/report/index'
import type { PdfAnswer, PdfJob } from './worker'
import { findWorkerFile } from './worker-file'

/** Longer than the longest report takes on a slow machine; a job that hangs must not hold those behind it. */
const timeoutMs = 30_000
/** An idle thread gives its memory back. */
const idleMs = 60_000
/** Beyond this the server says "busy" instead of queueing without end. */
const longestQueue = 500

interface Waiting { source: ReportSource, resolve: (bytes: Uint8Array) => void, reject: (error: Error) => void }

export class PdfError extends Error {
  constructor(readonly because: 'failed' | 'timeout' | 'crashed' | 'busy', detail = '') {
    super(detail ? `PDF ${because}: ${detail}` : `PDF ${because}`)
    this.name = 'PdfError'
  }
}

/** One thread and a queue: two at once would only take the processor from the requests. */
class PdfThread {
  private readonly queue: Waiting[] = []
  private worker: Worker | undefined
  private current: { id: number, job: Waiting, timer: NodeJS.Timeout } | undefined
  private idle: NodeJS.Timeout | undefined
  private starting = false
  private nextId = 1

  render(source: ReportSource): Promise<Uint8Array> {
    if (this.queue.length >= longestQueue) return Promise.reject(new PdfError('busy'))
    return new Promise((resolve, reject) => {
      this.queue.push({ source, resolve, reject })
      void this.next()
    })
  }

  async close(): Promise<void> {
    clearTimeout(this.idle)
    const worker = this.worker
    this.worker = undefined
    if (this.current) this.fail(new PdfError('crashed', 'closed'))
    await worker?.terminate()
  }

  private async next(): Promise<void> {
    if (this.current || this.starting || this.queue.length === 0) return
    clearTimeout(this.idle)
    // Set before anything is awaited: a second call in between would take a job and lose this one.
    this.starting = true
    const worker = await this.started()
    this.starting = false
    const job = worker && this.queue.shift()
    if (!worker || !job) return
    const id = this.nextId++
    this.current = { id, job, timer: setTimeout(() => this.fail(new PdfError('timeout')), timeoutMs) }
    worker.ref()
    worker.postMessage({ id, source: job.source } satisfies PdfJob)
  }

  private async started(): Promise<Worker | undefined> {
    if (this.worker) return this.worker
    try {
      const { file, fontsDir } = await findWorkerFile()
      const worker = new Worker(file, { workerData: { fontsDir }, resourceLimits: { maxOldGenerationSizeMb: 512 } })
      worker.on('message', (answer: PdfAnswer) => this.finish(answer))
      worker.on('error', error => worker === this.worker && this.fail(new PdfError('crashed', error.name)))
      worker.on('exit', () => worker === this.worker && this.fail(new PdfError('crashed', 'exit')))
      return this.worker = worker
    }
    catch (error) {
      for (const job of this.queue.splice(0)) job.reject(error instanceof Error ? error : new PdfError('crashed'))
      return undefined
    }
  }

  private finish(answer: PdfAnswer): void {
    if (answer.id !== this.current?.id) return
    const { job, timer } = this.current
    clearTimeout(timer)
    this.current = undefined
    if ('bytes' in answer) job.resolve(answer.bytes)
    else job.reject(new PdfError('failed', answer.error))
    if (this.queue.length === 0) this.rest()
    else void this.next()
  }

  /** The thread died or hangs: its job fails, a new thread takes the next one. */
  private fail(error: PdfError): void {
    const broken = this.worker
    const current = this.current
    this.worker = undefined
    this.current = undefined
    void broken?.terminate()
    if (current) {
      clearTimeout(current.timer)
      current.job.reject(error)
    }
    void this.next()
  }

  private rest(): void {
    this.worker?.unref()
    this.idle = setTimeout(() => void this.close(), idleMs).unref()
  }
}

const thread = new PdfThread()

/**
 * A report as PDF bytes, made in a thread of its own; requests wait their turn.
 *
 * @throws PdfError when the rendering failed, hung, or too many wait already
 */
export const renderPdf = (source: ReportSource): Promise<Uint8Array> => thread.render(source)

/** Ends the thread; for the end of the process and of a test file. */
export const closePdfThread = (): Promise<void> => thread.close()
