// npm run test:faults [-- --rounds N] [-- --mails N] [-- --seed N]: kills the program with SIGKILL at random moments while
// it signs and sends, and lets the mail server misbehave; then checks that nothing is lost, nothing was sent twice,
// every uncertain mail is a task, and both chains are whole. Everything stays on this machine.
import { spawn, spawnSync } from 'node:child_process'
import { mkdirSync, mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import { parseArgs } from 'node:util'
import { build } from 'esbuild'
import { openReadOnly } from '#server/database/connection'
import { systemActor } from '#server/services/context'
import { flushViews } from '#server/services/record-view'
import { openServices } from '#server/utils/open-services'
import { DemoClock, plusDays, workingTime } from './demo/clock'
import { adoptSets, makeOrganisation } from './demo/make-organisation'
import { makeFinished } from './demo/make-work'
import { Random } from './demo/random'
import { checkOutcome } from './faults/check'
import { misbehavingSink } from './faults/sink'
import { quietLog } from './settings'

const { values } = parseArgs({ options: { rounds: { type: 'string', default: '100' }, mails: { type: 'string', default: '300' }, seed: { type: 'string', default: '1' } } })
const [rounds, mails, seed] = [Number(values.rounds), Number(values.mails), Number(values.seed)]
const perRound = 3
const begin = new Date()
const folder = mkdtempSync(join(tmpdir(), 'orthodrome-faults-'))
process.on('exit', () => rmSync(folder, { recursive: true, force: true }))
for (const signal of ['SIGINT', 'SIGTERM'] as const) process.on(signal, () => process.exit(1))
const random = new Random(seed)
const workerFile = resolve(`node_modules/.cache/orthodrome/faults-worker-${process.pid}.mjs`)
process.on('exit', () => rmSync(workerFile, { force: true }))

/** An organisation with so many studies that wait for nothing but the signature; some come out with an open question and stay behind. */
async function makeReady(name: string, wanted: number): Promise<string> {
  const studies = Math.ceil(wanted * 1.2)
  const dataDir = join(folder, name)
  mkdirSync(dataDir, { mode: 0o700 })
  const services = await openServices({ dataDir, appOrigin: 'http://127.0.0.1:3000', smtpUrl: '', mailFrom: 'Orthodrome <reports@orthodrome.example>', demonstration: true, idleMinutes: 20, trustProxy: false }, '', quietLog)
  const clock = new DemoClock(workingTime(plusDays(begin, -380), 7))
  const context = { ...services, clock: clock.read, actor: systemActor }
  const organisation = await makeOrganisation(context, clock)
  await adoptSets(context, organisation)
  for (let index = 0; index < studies; index++) await makeFinished({ context, clock, random, organisation }, workingTime(plusDays(begin, -360 + Math.floor(index * 340 / studies)), 8), { signed: false })
  await flushViews(context)
  await services.db.destroy()
  return dataDir
}

interface Run { dataDir: string, smtpUrl: string, at: Date, mode: 'work' | 'drain', sign?: number }
function startWorker({ dataDir, smtpUrl, at, mode, sign = perRound }: Run) {
  const env = { ...process.env, NUXT_DATA_DIR: dataDir, NUXT_KEY_FILE: '', NUXT_SMTP_URL: smtpUrl, FAULTS_CLOCK: at.toISOString(), FAULTS_MODE: mode, FAULTS_SIGN: String(sign) }
  const child = spawn(process.execPath, [workerFile], { env, stdio: ['ignore', 'pipe', 'inherit'] })
  const ready = new Promise<void>(done => child.stdout.once('data', () => done()))
  const gone = new Promise<{ code: number | null, signal: NodeJS.Signals | null }>(done => child.once('exit', (code, signal) => done({ code, signal })))
  return { child, ready, gone }
}

/**
 * One life of the program, killed at a random moment: after it opened, or, every other time, after the mail server heard of
 * the first or second mail, so that the moments around the last byte are met, too.
 */
async function oneLife(run: Run, sink: Awaited<ReturnType<typeof misbehavingSink>>, inSending: boolean): Promise<void> {
  const { child, ready, gone } = startWorker(run)
  const kill = (afterMs: number) => setTimeout(() => child.kill('SIGKILL'), afterMs)
  let heard = 0
  const wanted = random.whole(1, 2)
  const timers: NodeJS.Timeout[] = []
  sink.state.onRecipient = () => {
    if (inSending && ++heard === wanted) timers.push(kill(random.between(0, 120)))
  }
  await Promise.race([ready, gone])
  timers.push(kill(inSending ? 10_000 : random.between(1, 4_000)))
  const { code, signal } = await gone
  timers.forEach(clearTimeout)
  sink.state.onRecipient = () => {}
  if (signal !== 'SIGKILL') throw new Error(`The program ended by itself with ${code ?? signal}.`)
}

async function finish(run: Omit<Run, 'mode'>): Promise<void> {
  const { code } = await startWorker({ ...run, mode: 'drain' }).gone
  if (code !== 0) throw new Error(`The last life of the program ended with ${code}.`)
}

const verify = (dataDir: string) => spawnSync(process.execPath, [resolve('scripts/run-ts.mjs'), resolve('scripts/verify.ts')], { env: { ...process.env, NUXT_DATA_DIR: dataDir, NUXT_KEY_FILE: '' }, encoding: 'utf8' })

/** Prints what was found. @returns how much of it is wrong */
async function judge(title: string, dataDir: string, sink: Awaited<ReturnType<typeof misbehavingSink>>, more: string): Promise<number> {
  const db = openReadOnly(join(dataDir, 'orthodrome.sqlite'))
  const { wrong, figures } = await checkOutcome(db, sink.seen)
  await db.destroy()
  const verified = verify(dataDir)
  if (verified.status !== 0) wrong.push(`npm run verify: ${verified.stdout}${verified.stderr}`)
  console.log(`\n${title}: ${more}`)
  console.log(`  mails: ${Object.entries(figures).map(([name, count]) => `${name} ${count}`).join(', ')}`)
  console.log(`  the server's conduct: ${Object.entries(sink.done).map(([name, count]) => `${name} ${count}`).join(', ')}`)
  console.log(`  both chains and every signed version: ${verified.status === 0 ? 'in order' : 'NOT IN ORDER'}`)
  console.log(wrong.length === 0 ? '  nothing lost, nothing sent twice, every uncertain mail a task' : wrong.map(line => `  WRONG ${line}`).join('\n'))
  return wrong.length
}

async function killing(): Promise<number> {
  const dataDir = await makeReady('killed', rounds * perRound)
  const sink = await misbehavingSink(seed, 20)
  const from = Date.now()
  for (let round = 0; round < rounds; round++) {
    // Each life begins when the leases of the one before are over; every third a day later, so that failed mails are due.
    const at = new Date(begin.getTime() + round * 9 * 3_600_000)
    await oneLife({ dataDir, smtpUrl: sink.url, at, mode: 'work' }, sink, round % 2 === 1)
  }
  sink.state.share = 0
  await finish({ dataDir, smtpUrl: sink.url, at: new Date(begin.getTime() + (rounds + 3) * 9 * 3_600_000) })
  const wrong = await judge('Killed while signing and sending', dataDir, sink, `${rounds} lives, each ended by SIGKILL, ${Math.round((Date.now() - from) / 1000)} s`)
  await sink.close()
  return wrong
}

async function misbehaving(): Promise<number> {
  const dataDir = await makeReady('faults', mails)
  const sink = await misbehavingSink(seed + 1, 60)
  const from = Date.now()
  await finish({ dataDir, smtpUrl: sink.url, at: begin })
  const wrong = await judge('A mail server that misbehaves', dataDir, sink, `${mails} reports and some more, ${Math.round((Date.now() - from) / 1000)} s`)
  await sink.close()
  return wrong
}

const lib = await import(resolve('scripts/lib.mjs')) as { aliases: Record<string, string> }
await build({ entryPoints: [resolve('scripts/faults/worker.ts')], outfile: workerFile, bundle: true, platform: 'node', format: 'esm', target: 'node20', alias: lib.aliases, packages: 'external', logLevel: 'warning' })
console.log(`Making about ${Math.ceil((rounds * perRound + mails) * 1.2)} studies that wait for their signature.`)
const wrong = (rounds > 0 ? await killing() : 0) + (mails > 0 ? await misbehaving() : 0)
console.log(wrong === 0 ? '\nEverything held.' : `\n${wrong} things are wrong.`)
process.exitCode = wrong === 0 ? 0 : 1
