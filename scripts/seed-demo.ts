// Makes the demonstration in an empty data folder: node scripts/run-ts.mjs scripts/seed-demo.ts [--studies N] [--seed N] [--if-empty]
import { existsSync, mkdirSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { parseArgs } from 'node:util'
import { sql } from 'kysely'
import { nobodyExists } from '#server/services/first-run'
import { systemActor } from '#server/services/context'
import { flushViews } from '#server/services/record-view'
import { openServices } from '#server/utils/open-services'
import { makeDemonstration } from './demo/make'
import { quietLog, scriptSettings } from './settings'

const { values } = parseArgs({ options: { 'studies': { type: 'string', default: '300' }, 'seed': { type: 'string', default: '1974' }, 'if-empty': { type: 'boolean', default: false } } })
const { settings, keyFile } = scriptSettings()
mkdirSync(settings.dataDir, { recursive: true, mode: 0o700 })
const file = join(settings.dataDir, 'demo-sign-ins.json')
const services = await openServices({ ...settings, demonstration: true }, keyFile, quietLog)

if (!await nobodyExists(services)) {
  await services.db.destroy()
  if (values['if-empty']) process.exit(existsSync(file) ? 0 : (console.error('The data folder holds work that is not a demonstration.'), 1))
  console.error('The data folder is not empty. Nothing was changed.')
  process.exit(1)
}

console.log('Making the demonstration organisation: invented people, about a year of work.')
const from = Date.now()
// Nothing in here is worth a write to the disk at each step: when the machine stops now, the folder is made anew.
await sql`pragma synchronous = OFF`.execute(services.db)
const context = { ...services, actor: systemActor }
const organisation = await makeDemonstration(context, { studies: Number(values.studies), seed: Number(values.seed), today: new Date() })
await flushViews(context)
await sql`pragma synchronous = FULL`.execute(services.db)
await sql`pragma wal_checkpoint(TRUNCATE)`.execute(services.db)
const counts = await sql<{ studies: number, referrals: number, events: number }>`select (select count(*) from study) as studies, (select count(*) from referral) as referrals, (select count(*) from audit_event) as events`.execute(services.db)
await services.db.destroy()

const order = ['technologist', 'neurologist', 'administrator', 'medical-director', 'referring-physician']
const people = [...organisation.people].sort((a, b) => order.indexOf(a.key) - order.indexOf(b.key)).filter(person => order.includes(person.key)).map(({ role, name, email, password, totpSecret }) => ({ role, name, email, password, totpSecret }))
const others = organisation.people.filter(person => !order.includes(person.key)).map(({ role, name, email, password, totpSecret }) => ({ role: `${role}, another`, name, email, password, totpSecret }))
writeFileSync(file, JSON.stringify({ people, others, practices: organisation.practices.map(({ name, passphrase }) => ({ name, passphrase })) }, null, 2), { mode: 0o600 })
const { studies, referrals, events } = counts.rows[0]!
console.log(`Made ${referrals} referrals with ${studies} studies and ${events} audit events in ${Math.round((Date.now() - from) / 1000)} s.`)
