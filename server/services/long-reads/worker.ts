import { parentPort, workerData } from 'node:worker_threads'
import { openReadOnly, type Database } from '#server/database/connection'
import { longReads, type LongReadName } from './index'

/** Entry of the thread: one read, one answer, then it ends. scripts/build-workers.mjs bundles it. */
export interface LongReadJob { file: string, name: LongReadName, input: unknown }
export type LongReadAnswer = { result: unknown } | { error: string }

async function answer({ file, name, input }: LongReadJob): Promise<LongReadAnswer> {
  const db = openReadOnly(file)
  try {
    const read = longReads[name] as (db: Database, input: unknown) => Promise<unknown>
    return { result: await read(db, input) }
  }
  catch (error) {
    return { error: error instanceof Error ? error.message : 'unknown' }
  }
  finally {
    await db.destroy()
  }
}

void answer(workerData as LongReadJob).then(result => parentPort!.postMessage(result))
