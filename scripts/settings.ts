import { existsSync } from 'node:fs'
import { join, resolve } from 'node:path'
import type { Log, Settings } from '#server/services/context'

const off = process.env.DEMO === '0'

/** The same folder and key file as the server's, from the same variables; the demonstration's when none is named. */
export function scriptSettings(): { settings: Settings, keyFile: string, database: string } {
  const dataDir = resolve(process.env.NUXT_DATA_DIR ?? process.env.DATA_DIR ?? (off ? '.data/orthodrome' : '.data/demo'))
  return {
    settings: {
      dataDir,
      appOrigin: process.env.NUXT_APP_ORIGIN ?? process.env.APP_ORIGIN ?? 'http://127.0.0.1:3000',
      smtpUrl: process.env.NUXT_SMTP_URL ?? process.env.SMTP_URL ?? '',
      mailFrom: process.env.NUXT_MAIL_FROM ?? 'Orthodrome <reports@orthodrome.example>',
      demonstration: !off,
      idleMinutes: 20,
      trustProxy: false,
    },
    keyFile: process.env.NUXT_KEY_FILE || process.env.KEY_FILE || `${dataDir}.key`,
    database: join(dataDir, 'orthodrome.sqlite'),
  }
}

/** Errors only: a script prints its own words. */
export const quietLog: Log = { info: () => undefined, warn: () => undefined, error: (_fields, text) => console.error(text) }

/** Ends the program with a plain sentence when there is no database yet. */
export function needDatabase(file: string): void {
  if (existsSync(file)) return
  console.error(`There is no database at ${file}. Start the application once, or set DATA_DIR.`)
  process.exit(1)
}
