// npm run backup -- [FILE]: one sealed file with the database and the uploads, also beside a running server. The key file is
// not in it and has to be kept somewhere else: without it no backup can be opened.
import { existsSync, mkdtempSync, readdirSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import Sqlite from 'better-sqlite3'
import { auditHead } from '#server/services/record-audit-event'
import { loadKeys } from '#server/services/keys'
import { openReadOnly } from '#server/database/connection'
import { ARCHIVE_FORMAT, describeFile, writeArchive, type ArchiveList } from './sealed-archive'
import { needDatabase, scriptSettings } from './settings'

const { settings, keyFile, database } = scriptSettings()
needDatabase(database)
const madeAt = new Date().toISOString()
const target = resolve(process.argv[2] ?? `${settings.dataDir}-backups/${madeAt.replace(/[:.]/g, '-')}.orthodrome-backup`)
const keys = loadKeys(keyFile, false)
const work = mkdtempSync(join(tmpdir(), 'orthodrome-backup-'))

try {
  // SQLite's own online copy: consistent while the server writes.
  const source = new Sqlite(database, { readonly: true })
  await source.backup(join(work, 'orthodrome.sqlite'))
  source.close()

  const sources = new Map([['orthodrome.sqlite', join(work, 'orthodrome.sqlite')]])
  const uploads = join(settings.dataDir, 'uploads')
  if (existsSync(uploads)) for (const name of readdirSync(uploads)) sources.set(`uploads/${name}`, join(uploads, name))

  const copy = openReadOnly(join(work, 'orthodrome.sqlite'))
  const list: ArchiveList = { format: ARCHIVE_FORMAT, madeAt, auditHead: await auditHead(copy), files: [...sources].map(([name, file]) => (describeFile(file, name))) }
  await copy.destroy()
  writeArchive(target, list, sources, keys)
  console.log(`Backup of ${list.files.length} files written to ${target}\nAudit head ${list.auditHead}\nKeep the key file ${keyFile} somewhere else: without it the backup cannot be opened.`)
}
finally {
  rmSync(work, { recursive: true, force: true })
}
