import { mkdirSync, readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import type { APIRequestContext, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { roleMay, type Action, type Role } from '#shared/permissions'
import type { OverviewView } from '#shared/schemas/overview'
import { policyNames } from '#shared/policies/index'
import { axeFindings, signIn, startApp, type App, type Window } from './app'

/**
 * Every page of app/pages, for every role that may open it: on a wide and a narrow screen, light and dark. A page file
 * that stands in no line of `addresses` fails, and so does one that no role could be shown.
 * With PICTURES=1 each page is kept as a picture in tests/e2e/out/pages.
 */
type Ask = <T>(path: string) => Promise<T>
interface Rows<T> { rows: T[] }

const one = <T>(rows: readonly T[], group: (row: T) => string = () => ''): T[] => rows.filter((row, index) => rows.findIndex(other => group(other) === group(row)) === index)
/** The administrator, who comes first, finds them; a technologist may read a report and has no list of them. */
let reports: { reportId: string, siteName: string }[] = []

/** The technologist asks it before the neurologist's pages are looked at: the demonstration has none. */
let question = ''

/** Where each page file is looked at; what differs by state is looked at in each state. */
const addresses: Record<string, (ask: Ask) => Promise<string[]>> = {
  'index.vue': async () => ['/'],
  'profile.vue': async () => ['/profile'],
  'intake/index.vue': async () => ['/intake', '/intake?state=all'],
  'intake/week.vue': async () => ['/intake/week', '/intake/week?by=technologist'],
  'intake/new.vue': async () => ['/intake/new'],
  'intake/import.vue': async () => ['/intake/import'],
  'intake/[id].vue': async ask => one((await ask<Rows<{ id: string, state: string }>>('/api/referrals?pageSize=100')).rows, row => row.state).filter(row => ['draft', 'received', 'accepted', 'answered'].includes(row.state)).map(row => `/intake/${row.id}`),
  'patients/[id].vue': async ask => one((await ask<Rows<{ id: string }>>('/api/patients?pageSize=3')).rows).map(row => `/patients/${row.id}`),
  'bench/index.vue': async () => ['/bench'],
  'bench/walk-in.vue': async () => ['/bench/walk-in'],
  'bench/sheets/index.vue': async () => ['/bench/sheets'],
  'bench/sheets/[protocol].vue': async () => ['/bench/sheets/carpal-tunnel?side=right'],
  'bench/offline.vue': async () => ['/bench/offline'],
  'bench/[studyId].vue': async (ask) => {
    const { sites } = await ask<{ sites: { id: string }[] }>('/api/me')
    const days = await Promise.all(sites.map(site => ask<{ studyId: string | null, state: string }[]>(`/api/bench?siteId=${site.id}`)))
    return one(days.flat().filter(row => row.studyId), row => row.state).map(row => `/bench/${row.studyId}`)
  },
  'reading/index.vue': async () => ['/reading', '/reading?state=read'],
  'reading/emergency.vue': async () => ['/reading/emergency'],
  'reading/[studyId].vue': async (ask) => {
    const waiting = await ask<Rows<{ studyId: string, readerId: string | null }>>('/api/reading?state=handed-over')
    const read = await ask<Rows<{ studyId: string }>>('/api/reading?state=read')
    return [...one(waiting.rows, row => String(row.readerId === null)), ...one(read.rows)].map(row => `/reading/${row.studyId}`)
  },
  'questions/[id].vue': async () => question ? [`/questions/${question}`] : [],
  'reports/[reportId].vue': async (ask) => {
    const { sites } = await ask<{ sites: { name: string }[] }>('/api/me')
    return one(reports.filter(report => sites.some(site => site.name === report.siteName))).map(report => `/reports/${report.reportId}`)
  },
  'dispatch/chase.vue': async () => ['/dispatch/chase'],
  'dispatch/incidents/index.vue': async () => ['/dispatch/incidents'],
  'dispatch/incidents/[id].vue': async ask => one(await ask<{ id: string }[]>('/api/incidents')).map(row => `/dispatch/incidents/${row.id}`),
  'dispatch/index.vue': async () => ['/dispatch', '/dispatch?state=acknowledged'],
  'shelf/index.vue': async () => ['/shelf'],
  'shelf/import.vue': async () => ['/shelf/import'],
  'shelf/[setId].vue': async ask => one(await ask<{ id: string }[]>('/api/shelf/sets')).map(set => `/shelf/${set.id}`),
  'shelf/policies/index.vue': async () => ['/shelf/policies'],
  'shelf/policies/[name].vue': async () => policyNames.map(name => `/shelf/policies/${name}`),
  'overview/index.vue': async () => ['/overview'],
  'overview/[indicator].vue': async (ask) => {
    const view = await ask<OverviewView>('/api/overview')
    return (['no-show', 'sign'] as const).flatMap(id => view.sites.slice(0, 1).map(site => `/overview/${id}?month=${view.months.at(-1)}&site=${site.id}`))
  },
  'directory/index.vue': async () => ['/directory'],
  'directory/new.vue': async () => ['/directory/new'],
  'directory/[practiceId].vue': async ask => one((await ask<Rows<{ id: string }>>('/api/directory/practices')).rows).map(row => `/directory/${row.id}`),
  'desk/index.vue': async () => ['/desk'],
  'desk/refer.vue': async () => ['/desk/refer'],
  'desk/answer/[referralId].vue': async ask => (await ask<Rows<{ id: string, answerable: boolean }>>('/api/desk/referrals?show=open')).rows.filter(row => row.answerable).slice(0, 1).map(row => `/desk/answer/${row.id}`),
  'desk/[reportId].vue': async ask => (await ask<Rows<{ reports: { reportId: string }[] }>>('/api/desk/referrals?show=answered')).rows.flatMap(row => row.reports).slice(0, 1).map(report => `/desk/${report.reportId}`),
  'people/index.vue': async () => ['/people'],
  'people/new.vue': async () => ['/people/new'],
  'people/[id].vue': async ask => one((await ask<Rows<{ id: string }>>('/api/people')).rows).map(row => `/people/${row.id}`),
  'sites/index.vue': async () => ['/sites'],
  'sites/new.vue': async () => ['/sites/new'],
  'sites/[id].vue': async ask => one((await ask<{ sites: { id: string }[] }>('/api/me')).sites).map(site => `/sites/${site.id}`),
  'ledger/index.vue': async () => ['/ledger'],
  'ledger/patient.vue': async () => ['/ledger/patient'],
  'ledger/retention.vue': async () => ['/ledger/retention'],
  'sign-in.vue': async () => ['/sign-in'],
  'forgotten-password.vue': async () => ['/forgotten-password'],
  'first-run.vue': async () => ['/first-run'],
  'set-password.vue': async () => ['/set-password?token=none'],
  'acknowledge/[token].vue': async () => ['/acknowledge/none'],
  'complete/[token].vue': async () => ['/complete/none-that-is-known-here'],
}

const files = readdirSync('app/pages', { recursive: true, encoding: 'utf8' }).filter(name => name.endsWith('.vue')).sort()
const source = (file: string) => readFileSync(join('app/pages', file), 'utf8')
const actionOf = (file: string) => /allow: '([^']+)'/.exec(source(file))?.[1] as Action | undefined
const isPublic = (file: string) => source(file).includes('public: true')
const seen = new Set<string>()

let app: App
let window: Window
beforeAll(async () => {
  app = await startApp()
  window = await app.open()
})
afterAll(() => app.close())

it('every page file has an address here', () => {
  expect(Object.keys(addresses).sort()).toEqual(files)
})

it('the pages of somebody who is not signed in are in order', async () => {
  expect(await lookAt(files.filter(isPublic), 'nobody')).toEqual([])
})

const rolesInOrder: Role[] = ['administrator', 'technologist', 'neurologist', 'medical-director', 'referring-physician']
it.each(rolesInOrder)('the pages of the %s are in order, the others closed', async (role) => {
  await window.context.clearCookies()
  await signIn(app, window.page, app.person(role))
  if (role === 'administrator') reports = (await asker(window.context.request)<Rows<{ reportId: string, siteName: string }>>('/api/dispatch?pageSize=100')).rows
  if (role === 'technologist') question = await askQuestion()
  const mine = files.filter(file => !isPublic(file) && (!actionOf(file) || roleMay(role, actionOf(file)!)))
  expect(await lookAt(mine, role)).toEqual([])
  // The demonstration's medical director is a neurologist as well, whose rooms are looked at under that name.
  const held: Role[] = role === 'medical-director' ? [role, 'neurologist'] : [role]
  const closed = files.filter(file => !isPublic(file) && actionOf(file) && !held.some(each => roleMay(each, actionOf(file)!)))
  for (const file of closed) {
    const path = `/${file.replace(/(\/?index)?\.vue$/, '').replace(/\[\w+\]/, 'none')}`
    expect([path, (await window.context.request.get(`${app.origin}${path}`)).status()]).toEqual([path, 403])
  }
})

it('no page was left out', () => {
  expect(files.filter(file => !seen.has(file))).toEqual([])
})

const asker = (request: APIRequestContext): Ask => async (path) => {
  const answer = await request.get(`${app.origin}${path}`)
  if (!answer.ok()) throw new Error(`${path} answered ${answer.status()}.`)
  return await answer.json()
}

/** A question of the bench to the readers, so that its page has something to show. */
async function askQuestion(): Promise<string> {
  const ask = asker(window.context.request)
  const { sites } = await ask<{ sites: { id: string }[] }>('/api/me')
  const days = await Promise.all(sites.map(site => ask<{ studyId: string | null, state: string }[]>(`/api/bench?siteId=${site.id}`)))
  const study = days.flat().find(row => row.studyId && row.state === 'recording')
  const answer = await window.context.request.post(`${app.origin}/api/studies/${study?.studyId}/questions`, { data: { question: 'Is the fibular nerve enough?' } })
  return (await answer.json() as { id: string }).id
}

/** Everything that is wrong with the pages, by address and screen; nothing when all is well. */
async function lookAt(pages: readonly string[], who: string): Promise<string[]> {
  const complaints: string[] = []
  const links = new Map<string, string>()
  for (const file of pages) {
    let visited = false
    for (const path of await addresses[file]!(asker(window.context.request))) {
      // Who comes later sees the same page with other parts: the narrow screen, where most can go wrong, is enough then.
      const found = await lookAtOne(path, who, links, seen.has(file) ? screens.filter(screen => screen.name === 'narrow, dark') : screens)
      complaints.push(...found.map(text => `${path} ${text}`))
      visited = true
    }
    if (visited) seen.add(file)
  }
  return [...complaints, ...await deadLinks(links)]
}

interface Screen { name: string, width: number, height: number, colorScheme: 'light' | 'dark', only?: string[] }
const screens: Screen[] = [
  { name: 'wide, light', width: 1280, height: 900, colorScheme: 'light' },
  { name: 'wide, dark', width: 1280, height: 900, colorScheme: 'dark', only: ['color-contrast'] },
  { name: 'narrow, dark', width: 390, height: 844, colorScheme: 'dark' },
  { name: 'narrow, light', width: 390, height: 844, colorScheme: 'light', only: ['color-contrast'] },
]

async function lookAtOne(path: string, who: string, links: Map<string, string>, looks: readonly Screen[]): Promise<string[]> {
  const { page, problems, outside } = window
  await page.setViewportSize(screens[0]!)
  await page.emulateMedia({ colorScheme: 'light' })
  await page.goto(`${app.origin}${path}`)
  await page.waitForFunction(() => (globalThis as unknown as { useNuxtApp?: () => { isHydrating?: boolean } }).useNuxtApp?.().isHydrating === false)
  const complaints = await bones(page)
  for (const screen of looks) {
    await page.setViewportSize(screen)
    await page.emulateMedia({ colorScheme: screen.colorScheme })
    const found = await axeFindings(page, screen.only)
    const [needed, there] = await page.evaluate(() => [document.documentElement.scrollWidth, innerWidth])
    if (needed! > there!) found.push(`is ${needed} px wide on ${there} px`)
    complaints.push(...found.map(text => `${screen.name}: ${text}`))
    if (process.env.PICTURES) await picture(page, `${who} ${path} ${screen.name}`)
  }
  await collectLinks(page, path, links)
  complaints.push(...problems.splice(0).map(text => `complains: ${text}`), ...outside.splice(0).map(url => `asks ${url}`))
  return complaints
}

/** One main heading and a title of its own. */
async function bones(page: Page): Promise<string[]> {
  const headings = await page.locator('h1:visible').count()
  const title = await page.title()
  return [...headings === 1 ? [] : [`has ${headings} main headings`], .../^.+ · Orthodrome$/.test(title) ? [] : [`has the title "${title}"`]]
}

/** Every link of the page to this server, with the page it was seen on; a link within the page is looked up at once. */
async function collectLinks(page: Page, path: string, links: Map<string, string>): Promise<void> {
  const found = await page.locator('a[href]').evaluateAll(nodes => nodes.map((node) => {
    const { origin, pathname, search, hash } = node as HTMLAnchorElement
    const inside = pathname === location.pathname && hash !== ''
    return { url: `${origin}${pathname}${search}`, here: origin === location.origin, lost: inside && !document.getElementById(hash.slice(1)) ? hash : '' }
  }))
  for (const { url, here, lost } of found) {
    if (here && !links.has(url)) links.set(url, path)
    if (lost) links.set(`${url}${lost}`, path)
  }
}

async function deadLinks(links: Map<string, string>): Promise<string[]> {
  const dead: string[] = []
  const left = [...links]
  const walk = async () => {
    for (let next = left.pop(); next; next = left.pop()) {
      const [url, from] = next
      if (url.includes('#')) dead.push(`${from} links to ${new URL(url).hash}, which is not on the page`)
      else if ((await window.context.request.get(url)).status() >= 400) dead.push(`${from} links to ${url.slice(app.origin.length)}, which does not open`)
    }
  }
  await Promise.all([walk(), walk(), walk(), walk()])
  return dead
}

async function picture(page: Page, name: string): Promise<void> {
  mkdirSync('tests/e2e/out/pages', { recursive: true })
  await page.screenshot({ path: `tests/e2e/out/pages/${name.replace(/[0-9a-f]{8}-[0-9a-f-]{27}/, (id: string) => id.slice(0, 4)).replace(/[^a-z0-9]+/gi, '-')}.png`, fullPage: true })
}
