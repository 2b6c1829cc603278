// npm start: installs, builds, migrates, makes the demonstration when the database is empty, starts the application and
// the local mail server, prints address and sign-ins. PORT, MAIL_PORT, DATA_DIR, DEMO=0, SMTP_URL, APP_ORIGIN and the settings
// of README are honoured.
import { spawn, spawnSync } from 'node:child_process'
import { existsSync, mkdirSync, openSync, readFileSync } from 'node:fs'
import { join, relative, resolve } from 'node:path'
import { buildIsFresh, checkNode, installPackages, projectRoot, run } from './lib.mjs'

checkNode()
installPackages()
if (!buildIsFresh()) {
  console.log('Building the application; this takes one to two minutes.')
  run('node', ['scripts/build.mjs'], { what: 'The build' })
}

const demo = process.env.DEMO !== '0'
const port = Number(process.env.PORT ?? 3000)
const mailPort = Number(process.env.MAIL_PORT ?? 3025)
const dataDir = resolve(projectRoot, process.env.DATA_DIR ?? (demo ? '.data/demo' : '.data/orthodrome'))
mkdirSync(dataDir, { recursive: true, mode: 0o700 })

const { startMailFake } = await import('./mail-fake.mjs')
let fake
if (demo || !process.env.SMTP_URL) {
  fake = await startMailFake({ pagePort: mailPort, dataDir }).catch((error) => {
    console.error(error.code === 'EADDRINUSE' ? `Port ${mailPort} is taken: set MAIL_PORT to another one.` : error.message)
    process.exit(1)
  })
}

const env = {
  ...process.env,
  NODE_ENV: 'production',
  HOST: demo ? '127.0.0.1' : process.env.HOST ?? '127.0.0.1',
  PORT: String(port),
  NUXT_DATA_DIR: dataDir,
  NUXT_KEY_FILE: process.env.KEY_FILE ?? '',
  NUXT_APP_ORIGIN: process.env.APP_ORIGIN ?? `http://127.0.0.1:${port}`,
  NUXT_SMTP_URL: fake ? `smtp://127.0.0.1:${fake.port}` : process.env.SMTP_URL,
  ...process.env.MAIL_FROM ? { NUXT_MAIL_FROM: process.env.MAIL_FROM } : {},
  NUXT_BOUNCE_IMAP_URL: fake ? fake.imapUrl : process.env.BOUNCE_IMAP_URL ?? '',
  NUXT_BOUNCE_ADDRESS: process.env.BOUNCE_ADDRESS ?? '',
  NUXT_BOUNCE_SECONDS: process.env.BOUNCE_SECONDS ?? (fake ? '5' : '60'),
  NUXT_DKIM_KEY_FILE: process.env.DKIM_KEY_FILE ?? '',
  NUXT_DKIM_SELECTOR: process.env.DKIM_SELECTOR ?? '',
  NUXT_DKIM_DOMAIN: process.env.DKIM_DOMAIN ?? '',
  NUXT_DEMO: demo ? '1' : '',
}

if (demo) {
  const made = spawnSync(process.execPath, [join(projectRoot, '.output/server/scripts/seed-demo.mjs'), '--if-empty'], { stdio: 'inherit', env })
  if (made.status !== 0) {
    console.error('The demonstration could not be made.')
    process.exit(1)
  }
}

// In the demonstration the log goes to a file, so that the sign-ins stay in view.
const logFile = demo ? join(dataDir, 'server.log') : undefined
const server = spawn(process.execPath, [join(projectRoot, '.output/server/index.mjs')], { stdio: ['inherit', logFile ? openSync(logFile, 'w', 0o600) : 'inherit', 'inherit'], env })
const stop = (code) => {
  server.kill('SIGTERM')
  fake?.close()
  process.exitCode = code
}
process.on('SIGINT', () => stop(0))
process.on('SIGTERM', () => stop(0))
server.on('exit', (code) => {
  if (code) console.error(`The application stopped (exit ${code}).`)
  process.exit(code ?? 0)
})

const address = `http://127.0.0.1:${port}`
for (let tries = 0; ; tries++) {
  const answered = await fetch(`${address}/api/health`).then(r => r.ok, () => false)
  if (answered) break
  if (tries > 300) {
    console.error(`The application did not answer at ${address}. Is port ${port} taken? Set PORT to another one.`)
    stop(1)
    break
  }
  await new Promise(resolve => setTimeout(resolve, 100))
}

console.log(`\nOrthodrome   ${address}`)
if (fake) console.log(`Local mail   http://127.0.0.1:${fake.pagePort}   (every mail lands here and goes no further)`)
const signIns = join(dataDir, 'demo-sign-ins.json')
if (demo && existsSync(signIns)) {
  console.log('\nDemonstration with invented people. Sign in with:')
  for (const person of JSON.parse(readFileSync(signIns, 'utf8')).people)
    console.log(`  ${person.role.padEnd(20)} ${person.email.padEnd(34)} ${person.password}${person.totpSecret ? '   (and a code)' : ''}`)
  console.log(`The present code of a second factor stands at the foot of http://127.0.0.1:${fake.pagePort}`)
  console.log('DEMO=0 npm start begins without invented people, in a data folder of its own.')
}
if (logFile) console.log(`What the application logs goes to ${relative(process.cwd(), logFile)}`)
console.log('\nCtrl C stops it.')
