import { execFileSync } from 'node:child_process'
import { writeFileSync } from 'node:fs'
import { join } from 'node:path'
import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { addTemperature, saved, startRecording, studyOf } from './bench-start'
import { expectFocus, press, tabTo } from './keyboard'

/**
 * Every kind of run, recorded by the keyboard alone, then seen by the reader and printed in the signed report. What is
 * typed is invented.
 */
let app: App
let technologist: Window & { studyUrl: string }
let neurologist: Window

beforeAll(async () => {
  app = await startApp()
  technologist = await startRecording(app, { protocol: 'carpal-tunnel', side: 'right', familyName: 'Strandberg', question: 'Carpal tunnel, weakness, or both?' })
  await addTemperature(technologist.page, 'RIGHT hand', '33.0')
  neurologist = await app.open()
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

/** Opens "Add a run" with A from wherever the grid stands, searches, and takes the first offer for this side. */
async function add(page: Page, words: string, first: RegExp, side: 'RIGHT' | 'LEFT' = 'RIGHT'): Promise<void> {
  await page.locator('h1').evaluate(head => (document.activeElement as HTMLElement | null)?.blur() ?? head)
  await press(page, 'a')
  await expectFocus(page, /^Nerve, muscle or root/)
  await page.keyboard.type(words)
  await press(page, 'ArrowDown', ...(side === 'LEFT' ? ['ArrowRight'] : []), 'Enter')
  await page.locator('[data-test=add-run]').waitFor({ state: 'detached' })
  await expectFocus(page, first)
}
/** Types from cell to cell with Tab; '' leaves one blank. */
async function along(page: Page, ...texts: string[]): Promise<void> {
  for (const text of texts) {
    if (text) await page.keyboard.type(text)
    await press(page, 'Tab')
  }
}

it('mixed and sensory runs for the combined sensory index', async () => {
  const { page } = technologist
  for (const [words, first, texts] of [
    ['median mixed palm', /^RIGHT median mixed/, ['1,9', '2,4', '42', '80']],
    ['ulnar mixed palm', /^RIGHT ulnar mixed/, ['1,5', '1,9', '25', '80']],
    ['median sensory digit 4', /^RIGHT median sensory, digit 4/, ['3,2', '4,0', '14', '140']],
    ['ulnar sensory digit 4', /^RIGHT ulnar sensory, digit 4/, ['2,6', '3,2', '15', '140']],
    ['median sensory digit 1', /^RIGHT median sensory, digit 1/, ['2,6', '3,3', '16', '100']],
    ['radial digit 1', /^RIGHT superficial radial sensory, digit 1/, ['1,9', '2,5', '18', '100']],
  ] as const) {
    await add(page, words, first)
    await along(page, ...texts)
  }
  await saved(page)
  const { assessment } = await studyOf(page, technologist.studyUrl)
  expect(assessment.comparisons.find(one => one.id === 'combined-sensory-index')?.results[0]?.print).toBe('2.1')
})

it('F-waves: the single latencies give shortest, mean, longest, persistence and, from ten on, chronodispersion', async () => {
  const { page } = technologist
  await add(page, 'median f-wave', /^RIGHT median F-wave, wrist, stimuli/)
  await press(page, 'End')
  await expectFocus(page, /^RIGHT median F-wave, wrist, single latencies, ms/)
  await page.keyboard.type('27,9 28,3 n 28,8 29,1 28,0 n 28,4 28,6 28,2 29,4 28,1')
  await press(page, 'Enter')
  const sheet = page.getByRole('region', { name: 'RIGHT median F-wave' })
  await sheet.getByText('persistence 83').waitFor()
  const words = (await sheet.locator('td.calc').first().innerText()).replace(/\s+/g, ' ')
  for (const expected of ['shortest 27.9 ms', 'mean 28.5 ms', 'longest 29.4 ms', 'persistence 83 %', 'chronodispersion 1.5 ms']) expect(words).toContain(expected)
  // Passed over once more, it is taken as it stands.
  const series = sheet.locator('input[aria-label*="single latencies"]')
  await series.focus()
  await press(page, 'Tab')
  expect(await series.inputValue()).toBe('27.9 28.3 n 28.8 29.1 28.0 n 28.4 28.6 28.2 29.4 28.1')
  expect(await sheet.getByRole('alert').count()).toBe(0)
})

it('H-reflex with M, and a train at rest and after exercise with times', async () => {
  const { page } = technologist
  await add(page, 'h-reflex flexor', /^RIGHT H-reflex, flexor carpi radialis, elbow, M latency/)
  await along(page, '2,9', '17,4', '11', '3,3')
  await page.getByRole('region', { name: 'RIGHT H-reflex, flexor carpi radialis' }).getByText('H/M 0.30').waitFor()

  await add(page, 'repetitive ulnar', /^RIGHT repetitive stimulation, ulnar, at rest, rate/)
  await along(page, '3', '', '')
  await page.keyboard.type('9,0 8,4 7,9 7,6 7,7 7,8')
  await press(page, 'Tab')
  await along(page, '3', '60', '')
  await page.keyboard.type('9,2 8,3 7,6 7,2 7,3 7,4')
  await press(page, 'Enter')
  const sheet = page.getByRole('region', { name: 'RIGHT repetitive stimulation, ulnar' })
  await sheet.getByText('decrement 16').waitFor()
  await sheet.getByText('decrement 22').waitFor()
})

it('blink reflex from both sides', async () => {
  const { page } = technologist
  await add(page, 'blink', /^RIGHT blink reflex/)
  await along(page, '10,6', '31,2', '32,0')
  await add(page, 'blink', /^LEFT blink reflex/, 'LEFT')
  await along(page, '10,9', '31,8', 'n')
  await page.getByRole('region', { name: 'RIGHT blink reflex' }).getByText('R2 difference 0.8').waitFor()
})

it('needle examination: first letters choose a step, a star makes the rest normal, a muscle is left out with its reason', async () => {
  const { page } = technologist
  await add(page, 'needle abductor pollicis brevis', /^RIGHT needle, abductor pollicis brevis, insertional activity/)
  await press(page, 'i', 'ArrowRight', '2', 'ArrowRight', '1', '*')
  const sheet = page.locator('[data-test=needle-sheet]')
  const steps = await sheet.locator('select').evaluateAll(all => all.map(each => (each as HTMLSelectElement).value))
  expect(steps).toEqual(['increased', '2+', '1+', '0', 'none', 'normal', 'normal', 'none', 'normal', 'full'])
  expect(await sheet.innerText()).toContain('C8, T1')

  await add(page, 'needle deltoid', /^RIGHT needle, deltoid, insertional activity/)
  await press(page, '#')
  await tabTo(page, /^Not examined, because/, { most: 40 })
  await page.keyboard.type('Anticoagulated; patient declines.')
  await press(page, 'Enter')
  await sheet.getByText('Not examined: Anticoagulated; patient declines.').waitFor()
})

it('a quality note and a comment stand with the run; the rest of the protocol says why it is not done', async () => {
  const { page } = technologist
  const sheet = page.getByRole('region', { name: 'RIGHT median F-wave' })
  await sheet.locator('input').first().focus()
  await press(page, '#')
  await expectFocus(page, /^(good|acceptable|poor)/)
  await press(page, 'ArrowDown', 'ArrowDown')
  await tabTo(page, /^cannot relax/)
  await press(page, 'Space')
  await tabTo(page, /^Comment on this run/)
  await page.keyboard.type('Many voluntary units.')
  await press(page, 'Enter')
  await sheet.locator('.chip').filter({ hasText: /poor.*cannot relax/ }).first().waitFor()
  for (const title of ['RIGHT median motor', 'RIGHT median sensory, digit 2', 'RIGHT ulnar sensory, digit 5', 'RIGHT ulnar motor']) {
    const left = page.getByRole('region', { name: title, exact: true })
    await left.locator('input').first().focus()
    await press(page, '#')
    await tabTo(page, /^Not done, because/, { most: 60 })
    await page.keyboard.type('Done last month.')
    await press(page, 'Enter')
    await left.getByText('Not done:').waitFor()
  }
  await expectNoAxeFindings(page)
  const panel = page.locator('[data-test=hand-over]')
  await panel.getByRole('button', { name: 'Hand over', exact: true }).focus()
  await press(page, 'Enter')
  await tabTo(page, /^Hand over to the reader$/, { most: 60 })
  await press(page, 'Enter')
  await panel.waitFor({ state: 'detached' })
})

/** What the reader and the paper must say, kind by kind. */
const told = ['combined sensory index', '2.1', 'persistence', '83', 'chronodispersion', '1.5', 'H/M ratio', '0.30', 'decrement', '16', '22', 'R2', '31.2', 'abductor pollicis brevis', 'increased', '2+', 'deltoid', 'Anticoagulated; patient declines.', 'cannot relax', 'Many voluntary units.']
const plain = (text: string) => text.normalize('NFKC').replace(/\s+/g, ' ').toLowerCase()

it('the reader sees every kind', async () => {
  const { page } = neurologist
  await signIn(app, page, app.person('neurologist'))
  await visit(page, technologist.studyUrl.replace('/bench/', '/reading/'))
  await page.getByRole('button', { name: 'Take this study' }).click()
  await page.getByRole('heading', { name: 'Impression' }).waitFor()
  await page.locator('main details').evaluateAll(all => all.forEach(details => (details as HTMLDetailsElement).open = true))
  const text = plain(await page.locator('main').innerText())
  expect(told.filter(word => !text.includes(plain(word)))).toEqual([])
  await expectNoAxeFindings(page)
})

it('signs it, and the report prints every kind', async () => {
  const { page } = neurologist
  await page.getByRole('button', { name: 'Add a line' }).click()
  await page.locator('[data-test=impression-line]').first().getByLabel(/in your words/).fill('See the findings.')
  await page.getByRole('textbox', { name: 'Clinical correlation' }).fill('Fits in part.')
  await page.getByRole('textbox', { name: 'Another limitation' }).fill('Protocol left out in part.')
  await page.getByRole('button', { name: 'Add', exact: true }).click()
  await page.locator('[data-test=draft-saving]').getByText(/saved \d\d:\d\d:\d\d/).waitFor()
  for (let open = page.locator('[data-test=check-check]').getByRole('button', { name: 'Answer with a reason' }); await open.count() > 0;) {
    await open.first().click()
    await page.getByLabel('Reason, printed in the report').fill('Seen.')
    await page.getByRole('button', { name: 'Keep reason' }).click()
    await page.waitForTimeout(800)
  }
  await page.getByLabel(/I reviewed the data/).check()
  await page.getByLabel('Your password, again').fill(app.person('neurologist').password)
  await page.getByRole('button', { name: 'Sign report' }).click()
  await page.getByRole('link', { name: 'Open the report' }).click()
  await page.waitForURL(/\/reports\//)
  await page.getByRole('heading', { name: 'Impression' }).waitFor()
  const screen = plain(await page.locator('main').innerText())
  expect(told.filter(word => !screen.includes(plain(word)))).toEqual([])
  const id = /\/reports\/([0-9a-f-]{36})/.exec(page.url())![1]
  const file = join(app.dataDir, 'kinds.pdf')
  writeFileSync(file, await (await page.request.get(`${app.origin}/api/reports/${id}/pdf`)).body())
  const paper = plain(execFileSync('pdftotext', ['-layout', file, '-'], { encoding: 'utf8' }))
  expect(told.filter(word => !plain(word).split(' ').every(part => paper.includes(part)))).toEqual([])
})

it('the next study of the same patient shows these values faint, with day and site, and puts none in', async () => {
  const { patientId, study } = await studyOf(technologist.page, technologist.studyUrl)
  const { page, studyUrl } = await startRecording(app, { protocol: 'carpal-tunnel', side: 'right', familyName: 'Strandberg', question: 'Better since?', patientId })
  expect((await page.request.post(`${studyUrl.replace('/bench/', '/api/studies/')}/runs`, { data: { technique: 'median-mixed-palm', side: 'right' }, headers: { origin: app.origin } })).ok()).toBe(true)
  await visit(page, studyUrl)
  const sheet = page.getByRole('region', { name: 'RIGHT median mixed, palm to wrist' })
  const day = new Intl.DateTimeFormat('en-GB', { day: 'numeric', month: 'short', year: 'numeric', timeZone: 'UTC' }).format(new Date(`${study.studyDate}T12:00:00Z`))
  await sheet.getByText(`faint: ${day}, Harrowmere Clinic`).waitFor()
  const onset = sheet.locator('input').first()
  await expect.poll(async () => [await onset.getAttribute('aria-label'), await onset.inputValue()], { timeout: 20_000 }).toEqual([expect.stringContaining('earlier 1.9'), ''])
  await expectNoAxeFindings(page)
})
