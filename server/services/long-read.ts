import { join } from 'node:path'
import { Worker } from 'node:worker_threads'
import { findWorkerFile } from '#server/pdf/worker-file'
import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import type { LongReadInput, LongReadName, LongReadResult } from './long-reads/index'
import type { LongReadAnswer, LongReadJob } from './long-reads/worker'

const timeoutMs = 120_000
/** One after the other: two at once would only take the processor from the requests. */
let last: Promise<unknown> = Promise.resolve()

/**
 * Runs a long read beside the server, so that nobody waits for it but the person who asked.
 * @throws DomainError 'unexpected' when it failed or took longer than two minutes
 * @example const view = await longRead(context, 'overview', { siteIds, now: now(context) })
 */
export function longRead<N extends LongReadName>(context: ServiceContext, name: N, input: LongReadInput<N>): Promise<LongReadResult<N>> {
  const mine = last.then(() => runInThread({ file: join(context.settings.dataDir, 'orthodrome.sqlite'), name, input }))
  last = mine.catch(() => undefined)
  return mine as Promise<LongReadResult<N>>
}

async function runInThread(job: LongReadJob): Promise<unknown> {
  const worker = new Worker((await findWorkerFile('long-read')).file, { workerData: job, resourceLimits: { maxOldGenerationSizeMb: 1024 } })
  try {
    return await new Promise((resolve, reject) => {
      const timer = setTimeout(() => reject(failed('too long')), timeoutMs)
      const end = (act: () => void) => {
        clearTimeout(timer)
        act()
      }
      worker.once('message', (answer: LongReadAnswer) => end(() => 'result' in answer ? resolve(answer.result) : reject(failed(answer.error))))
      worker.once('error', error => end(() => reject(failed(error.name))))
      worker.once('exit', () => end(() => reject(failed('exit'))))
    })
  }
  finally {
    await worker.terminate()
  }
}

const failed = (because: string) => new DomainError('unexpected', { log: `a long read failed: ${because}` })
