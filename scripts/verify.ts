// npm run verify: checks what must never change, names what was altered, and ends with exit code 1 when anything was.
// Reads only, so it may run beside the server and on a restored copy (DATA_DIR, KEY_FILE).
import { openReadOnly } from '#server/database/connection'
import { loadKeys } from '#server/services/keys'
import { checkChains } from '#server/services/check-chains'
import { verifyDatabase } from '#server/services/verify-database'
import { verifyReports } from '#server/services/verify-reports'
import { verifyUploads } from '#server/services/verify-uploads'
import { needDatabase, scriptSettings } from './settings'

const { settings, keyFile, database } = scriptSettings()
needDatabase(database)

/** One line for what was looked at, and one below it for each thing that is not as it was. */
function say(what: string, count: string, problems: readonly string[]): number {
  console.log(`${what.padEnd(18)} ${count.padEnd(34)} ${problems.length === 0 ? 'in order' : 'NOT IN ORDER'}`)
  for (const problem of problems) console.log(`  ${problem}`)
  return problems.length
}

const many = (n: number, one: string) => `${n.toLocaleString('en')} ${one}${n === 1 ? '' : 's'}`

async function verify(): Promise<number> {
  const keys = loadKeys(keyFile, false)
  const db = openReadOnly(database)
  try {
    console.log(`Checking ${settings.dataDir}\n`)
    const file = say('Database file', 'pages, foreign keys, guards', await verifyDatabase(db))
    const reports = await verifyReports(db)
    const altered = say('Signed versions', `${many(reports.versions, 'version')}, ${many(reports.pdfs, 'stored PDF')}`, reports.altered.map(({ number, version, because }) => `${number}, version ${version}: ${because}.`))
    const { acts, views, head } = await checkChains({ db, keys })
    const chains = say('Audit trail', many(acts.links, 'link'), acts.problems) + say('Views', many(views.links, 'link'), views.problems)
    const uploads = await verifyUploads({ db, keys, settings })
    const files = say('Uploaded files', many(uploads.files, 'file'), uploads.problems)
    console.log(`\nAudit head ${head}`)
    return file + altered + chains + files
  }
  finally {
    await db.destroy()
  }
}

try {
  const problems = await verify()
  console.log(problems === 0 ? 'Everything is as it was written.' : `${many(problems, 'problem')}: what is named above was altered or is damaged.`)
  process.exitCode = problems === 0 ? 0 : 1
}
catch (error) {
  console.error(`The check could not be finished. ${error instanceof Error ? error.message : String(error)}`)
  process.exitCode = 1
}
