import type { Database, Trx } from '#server/database/connection'

interface Waiting { act: (trx: Trx) => Promise<void>, written: () => void, failed: (error: unknown) => void, alone: () => Promise<void> }
interface Queue { waiting: Waiting[], busy: boolean }
const queues = new WeakMap<Database, Queue>()

/**
 * Small writes that come while another is being written share the next transaction: each transaction costs a flush to the
 * disk, and so five mails on five connections cost one and not five. The promise ends when it is on the disk. Where one of
 * them fails, each is written by itself, so that nobody fails for another.
 * @param act runs again after such a failure: it must do nothing but write through `trx`
 */
export async function writeTogether<T>(db: Database, act: (trx: Trx) => Promise<T>): Promise<T> {
  const queue = queues.get(db) ?? { waiting: [], busy: false }
  queues.set(db, queue)
  return await new Promise<T>((resolve, reject) => {
    let result: T
    queue.waiting.push({
      act: async (trx) => {
        result = await act(trx)
      },
      written: () => resolve(result),
      failed: reject,
      alone: async () => resolve(await db.transaction().execute(act)),
    })
    if (!queue.busy) void empty(db, queue)
  })
}

async function empty(db: Database, queue: Queue): Promise<void> {
  queue.busy = true
  // Whatever else is ready in this turn of the event loop comes along.
  await new Promise(done => setImmediate(done))
  while (queue.waiting.length > 0) {
    const batch = queue.waiting.splice(0)
    try {
      await db.transaction().execute(async (trx) => {
        for (const { act } of batch) await act(trx)
      })
      for (const { written } of batch) written()
    }
    catch (error) {
      if (batch.length === 1) batch[0]!.failed(error)
      else for (const { alone, failed } of batch) await alone().catch(failed)
    }
  }
  queue.busy = false
}
