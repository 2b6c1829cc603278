import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { startApp, type App, type Window } from './app'
import { cell, saved, startRecording, studyOf, type } from './bench-start'
import { expectFocus, focused, press } from './keyboard'

/** The recording grid as a spreadsheet: keys, units, blocks in and out, and nothing that moves while one types. */
let app: App
let technologist: Window & { studyUrl: string }

beforeAll(async () => {
  app = await startApp()
  technologist = await startRecording(app, { protocol: 'ulnar-elbow', side: 'right', familyName: 'Osterby', question: 'Ulnar nerve at the elbow?' })
  await technologist.context.grantPermissions(['clipboard-read', 'clipboard-write'], { origin: app.origin })
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const ulnar = (rest: string) => `RIGHT ulnar motor, ${rest}`
const focusOn = (page: Page, label: string) => cell(page, label).focus()

/** Where every row and every cell of the grid lies, to half a pixel. */
async function places(page: Page): Promise<string[]> {
  return await page.locator('[data-test=run-sheet] tr, [data-test=run-sheet] td, [data-test=run-sheet] th').evaluateAll(all => all.map((element) => {
    const { left, top, width, height } = element.getBoundingClientRect()
    return [left, top + scrollY, width, height].map(value => Math.round(value * 2) / 2).join(' ')
  }))
}

it('rows, columns and heights stay where they are while values, results, limits and questions appear', async () => {
  const { page } = technologist
  const before = await places(page)
  for (const [row, values] of [['wrist', ['2,9', '9,6', '5,5', '80']], ['below elbow', ['6,4', '6,2', '5,8', '205']], ['above elbow', ['9,1', '6,0', '6,2', '100']]] as const) {
    await focusOn(page, ulnar(`${row}, latency`))
    for (const value of values) {
      await page.keyboard.type(value)
      expect(await places(page)).toEqual(before)
      await press(page, 'Tab')
    }
  }
  await saved(page)
  await page.getByRole('region', { name: 'RIGHT ulnar motor' }).getByText('37').first().waitFor()
  await expect.poll(() => cell(page, ulnar('below elbow, amplitude')).getAttribute('aria-label'), { timeout: 20_000 }).toContain('questioned')
  expect(await places(page)).toEqual(before)
})

it('Home, End, arrows, Escape; Ctrl Z and Ctrl Y over the whole study', async () => {
  const { page } = technologist
  await focusOn(page, ulnar('wrist, amplitude'))
  await press(page, 'Home')
  await expectFocus(page, /wrist, latency/)
  await press(page, 'End')
  await expectFocus(page, /wrist, distance/)
  await press(page, 'ArrowDown', 'ArrowLeft')
  await expectFocus(page, /below elbow, duration/)
  await page.keyboard.type('9')
  await press(page, 'Escape')
  expect((await expectFocus(page, /below elbow, duration/)).value).toBe('5.8')
  await press(page, 'Control+z')
  expect((await expectFocus(page, /above elbow, distance/)).value).toBe('')
  await press(page, 'Control+z')
  expect((await expectFocus(page, /above elbow, duration/)).value).toBe('')
  await press(page, 'Control+y', 'Control+y')
  expect((await expectFocus(page, /above elbow, distance/)).value).toBe('100')
  await saved(page)
})

it.each([
  ['3,1 ms', '3.1', ''],
  ['3.1 mV', '3.1 mV', 'This column is in ms, and 3.1 mV was typed. Which is it?'],
])('"%s" in a column of milliseconds', async (typed, stands, question) => {
  const { page } = technologist
  const label = ulnar('wrist, latency, ms')
  await type(page, label, typed)
  expect(await cell(page, label).inputValue()).toBe(stands)
  if (question) {
    await page.getByRole('alert').filter({ hasText: question }).waitFor()
    await cell(page, label).press('Escape')
  }
  await type(page, label, '2.9')
  await saved(page)
})

it('a block goes to a spreadsheet and comes back, with rows and units named before anything is stored', async () => {
  const { page } = technologist
  await focusOn(page, ulnar('wrist, latency'))
  await press(page, 'Shift+ArrowRight', 'Shift+ArrowDown', 'Control+c')
  expect(await page.evaluate(() => navigator.clipboard.readText())).toBe('2.9\t9.6\n6.4\t6.2')
  await page.evaluate(() => navigator.clipboard.writeText('3,0\t9,8\n6,5\t0'))
  await press(page, 'Control+v')
  const preview = page.locator('[data-test=paste-preview]')
  await preview.waitFor()
  const rows = await preview.locator('tbody tr').allInnerTexts()
  expect(rows.map(row => row.replace(/\s+/g, ' '))).toEqual([
    'wrist latency, ms 2.9 3 ms replaces', 'wrist amplitude, mV 9.6 9.8 mV replaces', 'below elbow latency, ms 6.4 6.5 ms replaces', expect.stringContaining('below elbow amplitude, mV 6.2 0 left out: 0 is no reading'),
  ])
  const stored = async () => (await studyOf(page, technologist.studyUrl)).study.runs.find(run => run.technique === 'ulnar-motor-adm')!.rows[0]!.values.latencyMs
  expect(await stored()).toBe(2.9)
  await press(page, 'Enter')
  await preview.waitFor({ state: 'detached' })
  await saved(page)
  expect(await stored()).toBe(3)
  await press(page, 'Control+z')
  await saved(page)
  expect(await stored()).toBe(2.9)
})

it('a fall without slowing offers the median nerve at the elbow as a row; recorded, it is a note', async () => {
  const { page } = technologist
  const remark = page.locator('[data-test=remarks] li').filter({ hasText: 'fibres may cross' })
  await focusOn(page, ulnar('below elbow, amplitude'))
  await press(page, '?')
  await expectFocus(page, /^Add the row: median nerve at the elbow/)
  await press(page, 'Enter')
  await expect.poll(async () => (await focused(page)).name).toMatch(/^RIGHT ulnar motor, median nerve at the elbow, latency/)
  await expectFocus(page)
  await page.keyboard.type('6,1')
  await press(page, 'Tab')
  await page.keyboard.type('3,1')
  await press(page, 'Tab')
  await remark.getByText(/median nerve at the elbow 3\.1 mV/).waitFor()
  await saved(page)
})
