import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import type { StudyView } from '#shared/schemas/bench'
import { axeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { beginStudy, cell, saved, type } from './recorded-study'

/** Nothing typed is lost and nothing is stored twice: network gone, tab closed, server killed, somebody else in between. */
let app: App
let technologist: Window
let studyUrl = ''
const id = () => studyUrl.split('/').at(-1)!

beforeAll(async () => {
  app = await startApp()
  ;({ technologist, studyUrl } = await beginStudy(app, { familyName: 'Marklund' }))
  await visit(technologist.page, studyUrl)
  await technologist.page.evaluate(() => navigator.serviceWorker.ready.then(() => undefined))
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const state = (page: Page) => page.locator('[data-test=save-state]')
const studyOf = async (page: Page) => await (await page.request.get(`${app.origin}/api/studies/${id()}`)).json() as StudyView
const wrist = 'RIGHT median motor, wrist'
const ten: [string, string][] = [
  [`${wrist}, latency, ms`, '4.1'], [`${wrist}, amplitude, mV`, '7.3'], [`${wrist}, distance, mm`, '80'],
  ['RIGHT median motor, elbow, latency, ms', '8.2'], ['RIGHT median motor, elbow, amplitude, mV', '7.1'], ['RIGHT median motor, elbow, distance, mm', '215'],
  ['LEFT median motor, wrist, latency, ms', '3.6'], ['LEFT median motor, wrist, amplitude, mV', '8.4'], ['LEFT median motor, wrist, distance, mm', '80'],
  ['LEFT median motor, elbow, latency, ms', '7.5'],
]
const valuesOf = (page: Page, labels: readonly string[]) => Promise.all(labels.map(label => cell(page, label).inputValue()))
/** How often a cell was stored, as the audit trail has it. */
const timesStored = async (page: Page) => (await studyOf(page)).cellRevisions

it('ten cells without a network, the tab closed, opened again without the server, all there once', async () => {
  const { page, context } = technologist
  await app.kill('SIGKILL')
  for (const [label, text] of ten) await type(page, label, text)
  await state(page).getByText('10 values not saved yet, kept on this device and tried again').waitFor()
  await state(page).getByText('Show them').click()
  await page.locator('[data-test=unsent-list]').getByText('RIGHT median motor, wrist, latency: 4.1').waitFor()
  await page.close()

  const again = await context.newPage()
  await again.goto(studyUrl)
  await again.locator('[data-test=without-server]').getByText('The server cannot be reached.').waitFor()
  await cell(again, ten[0]![0]).waitFor()
  await expect.poll(() => valuesOf(again, ten.map(([label]) => label)), { timeout: 15_000 }).toEqual(ten.map(([, text]) => text))
  await type(again, 'LEFT median motor, elbow, amplitude, mV', '8.1')
  await state(again).getByText('11 values not saved yet').waitFor()
  expect(await axeFindings(again)).toEqual([])

  await app.restart()
  await state(again).getByText(/^saved \d\d:\d\d:\d\d$/).waitFor()
  await again.locator('[data-test=without-server]').getByText('The server is back.').waitFor()
  const revisions = Object.values(await timesStored(again))
  expect(revisions).toHaveLength(11)
  expect(new Set(revisions)).toEqual(new Set([1]))
  await visit(again, studyUrl)
  expect(await valuesOf(again, ten.map(([label]) => label))).toEqual(ten.map(([, text]) => text))
  technologist = { ...technologist, page: again }
})

it('nothing that can be read lies on the device, and nothing of the server\'s own answers', async () => {
  const { page } = technologist
  const caches = await page.evaluate(async () => {
    const names = await globalThis.caches.keys()
    const paths = await Promise.all(names.map(async name => (await (await globalThis.caches.open(name)).keys()).map(request => new URL(request.url).pathname)))
    const shell = await (await globalThis.caches.match('/bench/offline'))!.text()
    return { names, paths: paths.flat(), shell }
  })
  expect(caches.names).toHaveLength(1)
  expect(caches.paths.filter(path => !path.startsWith('/_nuxt/'))).toEqual(['/bench/offline'])
  expect(caches.shell).not.toMatch(/Marklund|Oakes/)
})

it('a server killed while typing loses nothing', async () => {
  const { page } = technologist
  await type(page, 'RIGHT median sensory, digit 2, wrist, onset', '2.9')
  await saved(page)
  await type(page, 'RIGHT median sensory, digit 2, wrist, peak', '3.6')
  await app.kill('SIGKILL')
  await type(page, 'RIGHT median sensory, digit 2, wrist, amplitude', '14')
  await state(page).getByText(/not saved yet, kept on this device/).waitFor()
  await type(page, 'RIGHT median sensory, digit 2, wrist, distance', '140')
  await app.restart()
  await state(page).getByRole('button', { name: 'Try now' }).click()
  await saved(page)
  const run = (await studyOf(page)).study.runs.find(each => each.technique === 'median-sensory-d2' && each.side === 'right')!
  expect(run.rows[0]!.values).toMatchObject({ onsetLatencyMs: 2.9, peakLatencyMs: 3.6, amplitudeUv: 14, distanceMm: 140 })
})

it('signing out with unsent cells asks; another person neither sees nor sends them; they are stored when their own person is back', async () => {
  const { page } = technologist
  await page.route('**/api/studies/*/cells', route => route.abort())
  await type(page, 'LEFT median sensory, digit 2, wrist, peak', '3.3')
  await state(page).getByText('1 value not saved yet, kept on this device').waitFor()
  await page.locator('[data-test=sign-out]').click()
  const ask = page.locator('[data-test=sign-out-ask]')
  await ask.getByText('1 value is not stored yet.').waitFor()
  await ask.getByRole('button', { name: 'Stay' }).click()
  await ask.waitFor({ state: 'detached' })
  await page.locator('[data-test=sign-out]').click()
  await ask.getByRole('button', { name: 'Sign out anyway' }).click()
  await page.waitForURL(/sign-in/)
  await page.unroute('**/api/studies/*/cells')

  await signIn(app, page, app.person('neurologist'))
  await visit(page, studyUrl)
  expect(await cell(page, 'LEFT median sensory, digit 2, wrist, peak').inputValue()).toBe('')
  await visit(page, `${app.origin}/reading`)
  expect(await page.locator('[data-test=unsent]').count()).toBe(0)
  await page.locator('[data-test=sign-out]').click()
  await page.waitForURL(/sign-in/)
  const left = await page.evaluate(() => new Promise<number>((done) => {
    const opening = indexedDB.open('orthodrome-offline')
    opening.onsuccess = () => {
      const count = opening.result.transaction('queues').objectStore('queues').count()
      count.onsuccess = () => done(count.result)
    }
  }))
  expect(left).toBe(1)

  await signIn(app, page, app.person('technologist'))
  await expect.poll(async () => (await studyOf(page)).study.runs.find(each => each.technique === 'median-sensory-d2' && each.side === 'left')?.rows[0]?.values.peakLatencyMs, { timeout: 20_000 }).toBe(3.3)
})

it('a value that somebody else stored meanwhile is put up for a choice, also when mine comes from a closed tab', async () => {
  const { page, context } = technologist
  const label = 'LEFT median motor, elbow, distance, mm'
  await visit(page, studyUrl)
  await page.route('**/api/studies/*/cells', route => route.abort())
  await type(page, label, '210')
  await state(page).getByText('1 value not saved yet, kept on this device').waitFor()
  const other = await app.open()
  await signIn(app, other.page, app.person('neurologist'))
  await visit(other.page, studyUrl)
  await type(other.page, label, '220')
  await saved(other.page)
  await page.close()
  const again = await context.newPage()
  await visit(again, studyUrl)
  const conflict = again.locator('[data-test=conflicts]')
  await conflict.getByText(/you typed 210, .* stored 220/).waitFor()
  expect(await axeFindings(again)).toEqual([])
  await conflict.getByRole('button', { name: 'Keep mine, 210' }).click()
  await saved(again)
  await expect.poll(() => cell(other.page, label).inputValue(), { timeout: 20_000 }).toBe('210')
  expect([technologist.outside, other.outside].flat()).toEqual([])
})
