import { randomUUID } from 'node:crypto'
import { chaseUnacknowledged } from '#server/services/chase'
import { closeOutbox, outboxTransport } from '#server/services/outbox-transport'
import { runOutboxOnce } from '#server/services/run-outbox'
import { servicesReady, systemContext } from '#server/utils/services'

const pauseMs = 1_000
const chaseMs = 10 * 60_000

/** Sends what is due, again and again, and now and then looks for what nobody acknowledged. A round that fails is tried again after the next pause; nothing is lost with it. */
export default defineNitroPlugin((nitro) => {
  const owner = randomUUID()
  let stopped = false
  let timer: NodeJS.Timeout | undefined
  let round: Promise<void> = Promise.resolve()
  let chasedAt = 0

  async function run() {
    const services = await servicesReady()
    try {
      await runOutboxOnce(systemContext(services), { transport: outboxTransport(services.settings), owner })
      if (Date.now() - chasedAt > chaseMs) {
        await chaseUnacknowledged(systemContext(services))
        chasedAt = Date.now()
      }
    }
    catch (error) {
      services.log.error({ err: error }, 'A round of the outbox failed')
    }
  }
  function again() {
    if (stopped) return
    timer = setTimeout(() => {
      round = run().then(again, again)
    }, pauseMs)
  }
  again()

  nitro.hooks.hook('close', async () => {
    stopped = true
    clearTimeout(timer)
    await round.catch(() => undefined)
    await closeOutbox()
  })
})
