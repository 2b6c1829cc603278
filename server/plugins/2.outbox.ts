import { randomUUID } from 'node:crypto'
import { closeOutbox, outboxTransport } from '#server/services/outbox-transport'
import { runOutboxOnce } from '#server/services/run-outbox'
import { servicesReady, systemContext } from '#server/utils/services'

const pauseMs = 1_000

/** Sends what is due, again and again. A round that fails is tried again after the next pause; nothing is lost with it. */
export default defineNitroPlugin((nitro) => {
  const owner = randomUUID()
  let stopped = false
  let timer: NodeJS.Timeout | undefined
  let round: Promise<void> = Promise.resolve()

  async function run() {
    const services = await servicesReady()
    try {
      await runOutboxOnce(systemContext(services), { transport: outboxTransport(services.settings), owner })
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
