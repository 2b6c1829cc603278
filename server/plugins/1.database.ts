import { writeFirstRunLink } from '#server/services/first-run'
import { mailSettings } from '#server/services/mail-settings'
import { flushViews } from '#server/services/record-view'
import { makeLogger } from '#server/utils/logger'
import { openServices } from '#server/utils/open-services'
import { provideServices, systemContext } from '#server/utils/services'

/** Opens the database, applies migrations, and prints the one-time link of the first administrator when nobody exists yet. */
export default defineNitroPlugin((nitro) => {
  const config = useRuntimeConfig()
  const log = makeLogger()
  const settings = {
    dataDir: config.dataDir, appOrigin: config.appOrigin, smtpUrl: config.smtpUrl, mailFrom: config.mailFrom,
    demonstration: String(config.demo) === '1' || String(config.demo) === 'true', idleMinutes: Number(config.idleMinutes), trustProxy: ['1', 'true'].includes(String(config.trustProxy)),
  }
  const opening = openChecked()
  // A setting that cannot be right is told like a database that cannot be opened.
  async function openChecked() {
    return await openServices({ ...settings, ...mailSettings(config) }, config.keyFile, log)
  }
  provideServices(opening)
  opening.then(async (services) => {
    const link = await writeFirstRunLink(systemContext(services))
    // Printed, never logged: a log may be copied elsewhere.
    if (link) process.stdout.write(`\nNobody has an account yet. Open this address once, within 24 hours, to make the first administrator:\n\n  ${link}\n\n`)
    nitro.hooks.hook('close', async () => {
      await flushViews(systemContext(services))
      await services.db.destroy()
    })
  }).catch((error: unknown) => {
    process.stderr.write(`Orthodrome cannot start. ${error instanceof Error ? error.message : String(error)}\n`)
    process.exit(1)
  })
})
