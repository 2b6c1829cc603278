import { raiseOverdue } from '#server/services/ask-reader'
import { hubOf } from '#server/utils/change-hub'
import { servicesReady, systemContext } from '#server/utils/services'

const QUESTIONS_MS = 20_000

/** Ends the open event streams before the server stops, which would wait for them; makes tasks of questions nobody answers. */
export default defineNitroPlugin((nitro) => {
  const endStreams = () => void servicesReady().then(services => hubOf(services).close()).catch(() => undefined)
  for (const signal of ['SIGTERM', 'SIGINT'] as const) process.once(signal, endStreams)
  const timer = setInterval(() => void servicesReady().then(async (services) => {
    await raiseOverdue(systemContext(services)).catch((error: unknown) => services.log.error({ err: error }, 'Looking for unanswered questions failed'))
  }), QUESTIONS_MS)
  timer.unref()
  nitro.hooks.hook('close', () => clearInterval(timer))
})
