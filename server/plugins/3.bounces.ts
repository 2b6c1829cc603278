import { takeBounces } from '#server/services/take-bounces'
import { servicesReady, systemContext } from '#server/utils/services'

/** Looks into the mailbox of bounces, again and again. A look that fails is tried again after the next pause. */
export default defineNitroPlugin((nitro) => {
  const pauseMs = Math.max(1, Number(useRuntimeConfig().bounceSeconds) || 60) * 1_000
  let stopped = false
  let timer: NodeJS.Timeout | undefined
  let round: Promise<void> = Promise.resolve()

  async function run() {
    const services = await servicesReady()
    if (!services.settings.bounceImapUrl) {
      stopped = true
      return
    }
    try {
      await takeBounces(systemContext(services))
    }
    catch (error) {
      services.log.warn({ kind: (error as Error).name }, 'The mailbox of bounces could not be read')
    }
  }
  function again() {
    if (stopped) return
    timer = setTimeout(() => {
      round = run().then(again, again)
    }, pauseMs)
    timer.unref()
  }
  again()

  nitro.hooks.hook('close', async () => {
    stopped = true
    clearTimeout(timer)
    await round.catch(() => undefined)
  })
})
