// npm run restore -- FILE FOLDER: unpacks a backup into a new folder, checks every file and the database, and says so. The
// folder becomes the data folder by DATA_DIR; the key file has to stand beside it (FOLDER.key) or be named by KEY_FILE.
import { existsSync, mkdirSync, readdirSync } from 'node:fs'
import { join, resolve } from 'node:path'
import Sqlite from 'better-sqlite3'
import { loadKeys } from '#server/services/keys'
import { readArchive } from './sealed-archive'
import { scriptSettings } from './settings'

const [source, folderName] = process.argv.slice(2)
if (!source || !folderName) {
  console.error('Say which backup and into which new folder: npm run restore -- FILE FOLDER')
  process.exit(1)
}
const folder = resolve(folderName)
if (existsSync(folder) && readdirSync(folder).length > 0) {
  console.error(`${folder} is not empty. Nothing was changed; name a new folder.`)
  process.exit(1)
}
mkdirSync(folder, { recursive: true, mode: 0o700 })
const keyFile = process.env.KEY_FILE ?? (existsSync(`${folder}.key`) ? `${folder}.key` : scriptSettings().keyFile)
const list = readArchive(resolve(source), folder, loadKeys(keyFile, false))
const database = new Sqlite(join(folder, 'orthodrome.sqlite'), { readonly: true })
const integrity = database.pragma('integrity_check', { simple: true })
const broken = database.pragma('foreign_key_check') as unknown[]
database.close()
if (integrity !== 'ok' || broken.length) {
  console.error(`The database in the backup is damaged (${integrity}, ${broken.length} broken references).`)
  process.exit(1)
}
console.log(`${list.files.length} files of ${list.madeAt} restored to ${folder} and found whole.\nAudit head ${list.auditHead}\nStart with: DATA_DIR=${folder} KEY_FILE=${keyFile} npm start`)
