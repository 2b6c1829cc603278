import { spawn, spawnSync, type ChildProcess } from 'node:child_process'
import { cpSync, mkdirSync } from 'node:fs'
import { createServer } from 'node:net'
import { join, resolve } from 'node:path'
import type { Settings } from '#server/services/context'
import { createSession } from '#server/services/sessions'
import { encodeSessionCookie, sessionCookieName } from '#server/utils/auth-cookie'
import { openServices } from '#server/utils/open-services'
import { systemContext } from '#server/utils/services'
import type { Role } from '#shared/permissions'
import { fillFolder } from '../fill/fill-folder'
import { quietLog } from '../settings'

/** A running server of the build on a data folder of its own, with a cookie for each kind of person. */
export interface Clinic { origin: string, dataDir: string, settings: Settings, keyFile: string, cookies: Record<'administrator' | 'neurologist', string>, stop: () => Promise<void> }

/** The demonstration with its real reports, made once by the built program. */
export function makeTemplate(folder: string, studies: number): string {
  const dataDir = join(folder, 'template')
  mkdirSync(dataDir, { recursive: true })
  const made = spawnSync(process.execPath, [resolve('.output/server/scripts/seed-demo.mjs'), '--studies', String(studies)], { stdio: ['ignore', 'ignore', 'inherit'], env: { ...process.env, NUXT_DATA_DIR: dataDir, NUXT_KEY_FILE: '', DEMO: '1' } })
  if (made.status !== 0) throw new Error('The demonstration could not be made.')
  return dataDir
}

export async function startClinic(folder: string, template: string, name: string, studies: number): Promise<Clinic> {
  const dataDir = join(folder, name)
  cpSync(template, dataDir, { recursive: true })
  cpSync(`${template}.key`, `${dataDir}.key`)
  const port = await freePort()
  const origin = `http://127.0.0.1:${port}`
  const keyFile = `${dataDir}.key`
  // Port 9 takes no mail: what waits in the outbox is no part of this.
  const settings: Settings = { dataDir, appOrigin: origin, smtpUrl: 'smtp://127.0.0.1:9', mailFrom: 'Orthodrome <reports@orthodrome.example>', demonstration: true, idleMinutes: 20, trustProxy: false }
  await fillFolder({ settings, keyFile, studies, seed: 2026, today: new Date() })
  const cookies = { administrator: await cookieOf(settings, keyFile, 'administrator'), neurologist: await cookieOf(settings, keyFile, 'neurologist') }
  const stop = await startServer(settings, port)
  return { origin, dataDir, settings, keyFile, cookies, stop }
}

/** A session as a sign-in makes it, for the person who holds the role at most sites. */
async function cookieOf(settings: Settings, keyFile: string, role: Role): Promise<string> {
  const services = await openServices(settings, keyFile, quietLog)
  try {
    const { userId } = await services.db.selectFrom('roleHolding').select('userId').where('role', '=', role).groupBy('userId').orderBy(eb => eb.fn.countAll(), 'desc').orderBy('userId').executeTakeFirstOrThrow()
    const sessionId = await services.db.transaction().execute(trx => createSession(systemContext(services), trx, { userId, secondFactor: true, agent: 'bench' }))
    const name = sessionCookieName(settings)
    return `${name}=${await encodeSessionCookie(sessionId, services.keys.authSecret, name)}`
  }
  finally {
    await services.db.destroy()
  }
}

async function startServer({ dataDir, appOrigin, smtpUrl }: Settings, port: number): Promise<() => Promise<void>> {
  const env = { ...process.env, NODE_ENV: 'production', HOST: '127.0.0.1', PORT: String(port), NUXT_DATA_DIR: dataDir, NUXT_KEY_FILE: '', NUXT_APP_ORIGIN: appOrigin, NUXT_SMTP_URL: smtpUrl, NUXT_DEMO: '1' }
  const server = spawn(process.execPath, [resolve('.output/server/index.mjs')], { stdio: ['ignore', 'ignore', 'inherit'], env })
  process.once('exit', () => server.kill())
  const stop = () => stopServer(server)
  for (let tries = 0; tries < 600; tries++) {
    if (await fetch(`${appOrigin}/api/health`).then(answer => answer.ok, () => false)) return stop
    if (server.exitCode !== null) break
    await new Promise(done => setTimeout(done, 100))
  }
  await stop()
  throw new Error('The built server did not start.')
}

async function stopServer(server: ChildProcess): Promise<void> {
  if (server.exitCode !== null || server.signalCode !== null) return
  const gone = new Promise(done => server.once('exit', done))
  const late = setTimeout(() => server.kill('SIGKILL'), 10_000)
  server.kill('SIGTERM')
  await gone
  clearTimeout(late)
}

async function freePort(): Promise<number> {
  return await new Promise((done) => {
    const probe = createServer().listen(0, '127.0.0.1', () => {
      const address = probe.address()
      probe.close(() => done(typeof address === 'object' && address ? address.port : 0))
    })
  })
}
