import { raiseOverdue } from '#server/services/raise-overdue'
import { servicesReady, systemContext } from '#server/utils/services'

const pauseMs = 5 * 60_000

/** Looks every five minutes for what has waited too long. A round that fails is tried again after the next pause. */
export default defineNitroPlugin((nitro) => {
  const timer = setInterval(() => void round(), pauseMs)
  timer.unref()
  async function round() {
    const services = await servicesReady()
    await raiseOverdue(systemContext(services)).catch((error: unknown) => services.log.error({ err: error }, 'A round of the clocks failed'))
  }
  nitro.hooks.hook('close', () => clearInterval(timer))
})
