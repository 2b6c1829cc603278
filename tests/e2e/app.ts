import { spawn, type ChildProcess } from 'node:child_process'
import { cpSync, mkdirSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { createRequire } from 'node:module'
import { createServer } from 'node:net'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core'
import { TOTP } from 'otpauth'
import { expect, inject, type TestContext } from 'vitest'
import { startMailFake } from '../../scripts/mail-fake.mjs'

export interface DemoPerson { role: string, name: string, email: string, password: string, totpSecret?: string }
export interface DemoPractice { name: string, passphrase: string }

export interface App {
  origin: string
  dataDir: string
  mail: Awaited<ReturnType<typeof startMailFake>>
  people: DemoPerson[]
  practices: DemoPractice[]
  person: (role: string) => DemoPerson
  restart: () => Promise<void>
  kill: (signal: NodeJS.Signals) => Promise<void>
  browser: Browser
  /** A browser window of its own, with every console error and outside request collected. */
  open: (options?: { width?: number, height?: number, dark?: boolean }) => Promise<Window>
  /** For afterEach: keeps a picture of every window when a test failed. */
  onFailure: (context: TestContext) => Promise<void>
  close: () => Promise<void>
}
export interface Window { page: Page, context: BrowserContext, problems: string[], outside: string[] }

const chromiumFlags = ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync']

/** A server on a copy of the template data, a local mail server and a browser. Call `close` in afterAll. */
export async function startApp(environment: Record<string, string> = {}, { empty = false } = {}): Promise<App> {
  const folder = mkdtempSync(join(tmpdir(), 'orthodrome-e2e-'))
  if (!empty) cpSync(inject('template'), folder, { recursive: true })
  const dataDir = join(folder, 'data')
  mkdirSync(dataDir, { recursive: true })
  const mail = await startMailFake()
  const port = await freePort()
  const origin = `http://127.0.0.1:${port}`
  const env = { ...process.env, NODE_ENV: 'production', HOST: '127.0.0.1', PORT: String(port), NUXT_DATA_DIR: dataDir, NUXT_APP_ORIGIN: origin, NUXT_SMTP_URL: `smtp://127.0.0.1:${mail.port}`, NUXT_BOUNCE_IMAP_URL: mail.imapUrl, NUXT_BOUNCE_SECONDS: '1', NUXT_DEMO: empty ? '' : '1', ...environment }
  let server: ChildProcess
  const start = async () => {
    server = spawn(process.execPath, [resolve('.output/server/index.mjs')], { env, stdio: ['ignore', process.env.SHOW_SERVER ? 'inherit' : 'ignore', 'inherit'] })
    for (let tries = 0; ; tries++) {
      if (await fetch(`${origin}/api/health`).then(r => r.ok, () => false)) return
      if (tries > 200 || server.exitCode !== null) throw new Error('The server did not start.')
      await new Promise(done => setTimeout(done, 100))
    }
  }
  const kill = async (signal: NodeJS.Signals) => {
    if (server.exitCode !== null || server.signalCode !== null) return
    const gone = new Promise(done => server.once('exit', done))
    server.kill(signal)
    await gone
  }
  await start()
  const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium', args: chromiumFlags })
  const windows: Window[] = []
  const known = empty ? { people: [], practices: [] } : JSON.parse(readFileSync(join(dataDir, 'demo-sign-ins.json'), 'utf8')) as { people: DemoPerson[], practices: DemoPractice[] }
  return {
    origin,
    dataDir,
    mail,
    people: known.people,
    practices: known.practices,
    person: (role) => {
      const found = known.people.find(p => p.role === role)
      if (!found) throw new Error(`The demonstration has no ${role}.`)
      return found
    },
    onFailure: async ({ task }) => {
      if (task.result?.state === 'fail') await takePictures(task.name, windows)
    },
    kill,
    restart: async () => {
      await kill('SIGTERM')
      await start()
    },
    browser,
    open: async ({ width = 1280, height = 900, dark = false } = {}) => {
      const context = await browser.newContext({ viewport: { width, height }, colorScheme: dark ? 'dark' : 'light', acceptDownloads: true, locale: 'en-GB', timezoneId: 'Europe/Prague', reducedMotion: 'reduce' })
      const page = await context.newPage()
      const problems: string[] = []
      const outside: string[] = []
      page.on('console', (message) => {
        if (message.type() === 'error') problems.push(`${message.text()} (${message.location().url})`)
      })
      page.on('pageerror', error => problems.push(error.message))
      page.on('request', (request) => {
        if (!request.url().startsWith(origin) && !/^(data|blob|about):/.test(request.url())) outside.push(request.url())
      })
      const opened = { page, context, problems, outside }
      windows.push(opened)
      return opened
    },
    close: async () => {
      await browser.close()
      await kill('SIGTERM')
      await mail.close()
      rmSync(folder, { recursive: true, force: true })
    },
  }
}

/** What every window showed when a test failed, in tests/e2e/out (not in the repository). */
async function takePictures(name: string, windows: readonly Window[]): Promise<void> {
  mkdirSync('tests/e2e/out', { recursive: true })
  for (const [index, { page, problems }] of windows.entries()) {
    await page.screenshot({ path: `tests/e2e/out/${name.replace(/[^a-z0-9]+/gi, '-').slice(0, 60)}-${index + 1}.png`, fullPage: true }).catch(() => undefined)
    if (problems.length) console.error(`Window ${index + 1} at ${page.url()}: ${problems.join(' | ')}`)
  }
}

async function freePort(): Promise<number> {
  return await new Promise((done) => {
    const probe = createServer().listen(0, '127.0.0.1', () => {
      const address = probe.address()
      probe.close(() => done(typeof address === 'object' && address ? address.port : 0))
    })
  })
}

/** Goes to a page and waits until it is hydrated, so that typing before that is not lost. */
export async function visit(page: Page, url: string) {
  await page.goto(url)
  await page.waitForLoadState('networkidle')
}

const lastCode = new Map<string, string>()

/** Signs in through the page, with the second factor where the person has one. */
export async function signIn(app: App, page: Page, person: DemoPerson) {
  await visit(page, `${app.origin}/sign-in`)
  await page.getByLabel('E-mail').fill(person.email)
  await page.getByLabel('Password', { exact: true }).fill(person.password)
  if (person.totpSecret) await page.getByLabel(/code/i).fill(await freshCode(person.totpSecret))
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.waitForURL(url => !url.pathname.startsWith('/sign-in'))
  await page.waitForLoadState('networkidle')
}

/** A code that was not used yet: each time step works once, so the next one is awaited when needed. */
export async function freshCode(secret: string): Promise<string> {
  const totp = new TOTP({ secret })
  for (;;) {
    const code = totp.generate()
    if (lastCode.get(secret) !== code) {
      lastCode.set(secret, code)
      return code
    }
    await new Promise(done => setTimeout(done, 500))
  }
}

const axeSource = createRequire(import.meta.url).resolve('axe-core/axe.min.js')

interface AxeViolation { id: string, help: string, nodes: { target: string[], failureSummary: string }[] }

/** What axe finds on the page as it stands: which rule and where. `only` limits it to some rules. */
export async function axeFindings(page: Page, only: readonly string[] = []): Promise<string[]> {
  // The page's own policy refuses an added script tag, so the source is evaluated.
  if (!await page.evaluate(() => 'axe' in window)) await page.evaluate(readFileSync(axeSource, 'utf8'))
  const violations = await page.evaluate(async (rules) => {
    const { axe } = window as unknown as { axe: { run: (root: Document, options: object) => Promise<{ violations: AxeViolation[] }> } }
    const tags = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice']
    return (await axe.run(document, { runOnly: rules.length ? rules : tags, resultTypes: ['violations'] })).violations
  }, only)
  return violations.map(v => `${v.id}: ${v.help} at ${v.nodes.slice(0, 4).map(n => n.target.join(' ')).join(' | ')}`)
}

export async function expectNoAxeFindings(page: Page) {
  expect(await axeFindings(page)).toEqual([])
}
