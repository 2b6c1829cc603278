import { join } from 'node:path'
import type { Locator, Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import type { StudyView } from '#shared/schemas/bench'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { bookStudy } from './booked-study'
import { expectFocus, press, tabTo } from './keyboard'

/** A day at the bench, by the keyboard alone: who comes, who does not, and what is done when it goes wrong. */
let app: App
let bench: Window
const trace = join('tests', 'fixtures', 'trace.png')

beforeAll(async () => {
  app = await startApp()
  await bookStudy(app, { protocol: 'carpal-tunnel', side: 'right', familyName: 'Absalon', question: 'Carpal tunnel?', time: '21:00' })
  await bookStudy(app, { protocol: 'carpal-tunnel', side: 'right', familyName: 'Brandvold', question: 'Carpal tunnel, again?', time: '21:40' })
  await bookStudy(app, { protocol: 'carpal-tunnel', side: 'right', familyName: 'Cederlund', question: 'Numb thumb?', time: '22:20' })
  bench = await app.open()
  await signIn(app, bench.page, app.person('technologist'))
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const studyIn = async (page: Page, url = page.url()) => await (await page.request.get(url.replace('/bench/', '/api/studies/'))).json() as StudyView
const atStudy = (page: Page) => page.waitForURL(/\/bench\/[0-9a-f-]{36}$/)
/** Opens a folded part and stands in it. */
async function open(page: Page, part: Locator): Promise<void> {
  await part.locator('summary').first().focus()
  if (!await part.evaluate(element => (element as HTMLDetailsElement).open)) await press(page, 'Enter')
}
/** Space on a box or a choice, Enter on a button: as people without a mouse do. */
async function tick(page: Page, box: Locator): Promise<void> {
  await box.focus()
  await press(page, 'Space')
}
async function act(page: Page, button: Locator): Promise<void> {
  await button.focus()
  await expectFocus(page)
  await press(page, 'Enter')
}
async function type(page: Page, field: Locator, text: string): Promise<void> {
  await field.focus()
  await page.keyboard.type(text)
}
async function confirm(page: Page, { side = 'RIGHT' } = {}): Promise<void> {
  const form = page.locator('[data-test=confirm]')
  await tick(page, form.getByLabel(/Name:/))
  await tick(page, form.getByLabel(/Date of birth:/))
  await tick(page, form.getByLabel(side, { exact: true }))
  await tick(page, form.getByLabel('I read the cautions'))
  await press(page, 'Tab')
  await tabTo(page, /Confirm and record/)
  await press(page, 'Enter')
  await form.waitFor({ state: 'detached' })
}
async function start(page: Page, name: string): Promise<void> {
  await visit(page, `${app.origin}/bench`)
  await act(page, page.getByRole('button', { name: `Start study: ${name}` }))
  await atStudy(page)
  await page.locator('[data-test=confirm]').waitFor()
}
const cell = (page: Page, label: string) => page.locator(`input[aria-label^="${label}"]`)
async function enter(page: Page, label: string, text: string): Promise<void> {
  await type(page, cell(page, label), text)
  await press(page, 'Tab')
  await page.locator('[data-test=save-state]').getByText(/^saved \d\d:\d\d:\d\d$/).waitFor()
}

it('arrival is noted and taken back; who does not come is marked with what is known', async () => {
  const { page } = bench
  await visit(page, `${app.origin}/bench`)
  await act(page, page.getByRole('button', { name: 'Arrived: Absalon, Tove' }))
  await act(page, page.getByRole('button', { name: 'Not here after all: Absalon, Tove' }))
  await act(page, page.getByRole('button', { name: 'Arrived: Absalon, Tove' }))
  await page.getByRole('row').filter({ hasText: 'Absalon' }).getByText('0 min so far').waitFor()
  await act(page, page.getByRole('button', { name: 'Did not attend: Brandvold, Tove' }))
  await type(page, page.getByRole('dialog').getByLabel('What is known'), 'Telephoned: ill.')
  await act(page, page.getByRole('button', { name: 'Mark as not attended' }))
  await page.locator('[data-test=bench-counts]').getByText(/1 did not attend/).waitFor()
  expect(await page.locator('[data-test=bench-counts]').textContent()).toMatch(/\d waiting here/)
  await expectNoAxeFindings(page)
})

it('protocol, circumstances, traces, a skipped run and the sheet before the hand-over; all of it reaches the reader', async () => {
  const { page } = bench
  await start(page, 'Absalon, Tove')
  await confirm(page)
  const list = page.getByRole('navigation', { name: 'Runs' })
  await list.getByText('4 left').waitFor()
  await enter(page, 'RIGHT median motor, wrist, latency, ms', '3.4')
  await enter(page, 'RIGHT median motor, wrist, amplitude, mV', '9.1')

  const circumstances = page.locator('[data-test=circumstances]')
  await open(page, circumstances)
  await tick(page, circumstances.getByLabel('in the suite'))
  await tick(page, circumstances.getByLabel('with discomfort'))
  await expect.poll(async () => (await studyIn(page)).around.circumstances).toMatchObject({ supervision: 'in-suite', tolerance: 'with-discomfort', room: 'Room 2' })

  await open(page, page.locator('details', { has: page.locator('[data-test=attachments]') }))
  await page.locator('[data-test=attachments] input[type=file]').setInputFiles(trace)
  await page.locator('[data-test=attachments]').getByRole('img', { name: 'Traces: trace.png' }).waitFor()
  await open(page, page.locator('details', { has: page.locator('[data-test=comments]') }))
  await type(page, page.getByLabel('Comment', { exact: true }), 'Repeated twice.')
  await act(page, page.getByRole('button', { name: 'Add comment' }))
  await page.locator('[data-test=comments]').getByText('Repeated twice.').waitFor()

  for (const run of ['median sensory, digit 2', 'ulnar sensory, digit 5', 'ulnar motor']) {
    const sheet = page.getByRole('region', { name: `RIGHT ${run}` }).first()
    await act(page, sheet.getByRole('button', { name: /^Notes, steps/ }))
    await act(page, sheet.getByRole('button', { name: 'could not be tolerated' }))
    await act(page, sheet.getByRole('button', { name: 'Leave this run out' }))
    await sheet.getByText('Not done:').waitFor()
  }
  await list.getByText('1 left').waitFor()
  await expectNoAxeFindings(page)

  const handOver = page.locator('[data-test=hand-over]')
  await act(page, handOver.getByRole('button', { name: 'Hand over' }))
  await handOver.getByText('Height is missing').waitFor()
  await handOver.getByText(/ulnar motor not done: could not be tolerated/).waitFor()
  await act(page, handOver.getByRole('button', { name: 'Hand over to the reader' }))
  await page.getByText('Handed over: the reader sees it now.').waitFor()

  const url = page.url()
  const reader = await app.open()
  await signIn(app, reader.page, app.person('neurologist'))
  await visit(reader.page, url.replace('/bench/', '/reading/'))
  await reader.page.getByRole('img', { name: 'Traces: trace.png' }).waitFor()
  await reader.page.getByText('Repeated twice.').waitFor()
  await reader.page.getByLabel('Planned and not done').getByText('could not be tolerated').first().waitFor()
  await reader.page.getByText('in the suite').waitFor()
  await expectNoAxeFindings(reader.page)

  const { study, id } = await studyIn(page, url)
  const run = study.runs.find(each => each.technique === 'median-motor-apb')!
  await reader.page.request.post(`${app.origin}/api/studies/${id}/take`, { data: {}, headers: { origin: app.origin } })
  const answer = await reader.page.request.post(`${app.origin}/api/studies/${id}/return`, { data: { question: 'Was the wrist warm?', runId: run.id }, headers: { origin: app.origin } })
  expect(answer.ok()).toBe(true)
  await reader.context.close()
  await visit(page, url)
  await page.getByRole('region', { name: 'RIGHT median motor' }).getByText('Asked by the reader: Was the wrist warm?').waitFor()
  expect((await expectFocus(page)).name).toMatch(/^RIGHT median motor/)
  const asked = page.locator('[data-test=asked]')
  await type(page, asked.getByLabel('Answer', { exact: true }), 'Yes, 33 degrees.')
  await press(page, 'Enter')
  await asked.getByText(/: Yes, 33 degrees\.$/).waitFor()
})

it('a patient without a booking is at the confirmation within the keys of one form', async () => {
  const { page } = bench
  await visit(page, `${app.origin}/bench`)
  await act(page, page.getByRole('link', { name: 'Without a booking' }))
  await page.waitForURL(/walk-in/)
  await type(page, page.getByLabel('Find the patient'), 'Brandvold')
  await act(page, page.getByRole('button', { name: /^Choose Brandvold/ }))
  const form = page.locator('[data-test=walk-in]')
  await act(page, form.getByRole('button', { name: 'Go to the confirmation' }))
  await form.getByRole('link', { name: 'Choose the side.' }).waitFor()
  await type(page, form.getByLabel('Clinical question'), 'Wrist drop since this morning?')
  await tick(page, form.getByLabel('RIGHT', { exact: true }))
  await form.getByLabel('Protocol').focus()
  await page.keyboard.type('Carp')
  for (const caution of await form.getByRole('group', { name: /cardiac device|pacing wire/ }).all()) await tick(page, caution.getByLabel('no', { exact: true }))
  await expectNoAxeFindings(page)
  await act(page, form.getByRole('button', { name: 'Go to the confirmation' }))
  await atStudy(page)
  await page.locator('[data-test=confirm]').waitFor()
  expect((await studyIn(page)).study.runs).toHaveLength(4)
})

it('begun under the wrong patient: the values move with a reason, both records say so, and are looked at again', async () => {
  const { page } = bench
  await confirm(page)
  await enter(page, 'RIGHT median motor, wrist, latency, ms', '4.6')
  const wrongUrl = page.url()
  const wrong = page.locator('[data-test=when-wrong]')
  await open(page, wrong)
  await act(page, wrong.getByRole('button', { name: 'Wrong patient: move the values' }))
  const move = page.locator('[data-test=move-study]')
  await move.getByLabel('The patient who lay there').locator('option', { hasText: 'Cederlund' }).waitFor({ state: 'attached' })
  await move.getByLabel('The patient who lay there').focus()
  await page.keyboard.type('Ceder')
  await type(page, move.getByLabel('How it came about'), 'The neighbour answered to the name.')
  await act(page, move.getByRole('button', { name: 'Move the values' }))
  await page.waitForURL(url => url.toString() !== wrongUrl)
  await page.locator('[data-test=confirm]').waitFor()
  const moved = await studyIn(page)
  expect(moved.band.familyName).toBe('Cederlund')
  expect(moved.study.runs.find(run => run.technique === 'median-motor-apb')?.rows[0]?.values.latencyMs).toBe(4.6)
  await confirm(page)
  await act(page, page.locator('[data-test=moved-values]').getByRole('button'))
  await page.locator('[data-test=study-origin]').getByText(/Looked at again by/).waitFor()
  const newUrl = page.url()
  await visit(page, wrongUrl)
  await page.locator('[data-test=study-origin]').getByText(moved.number).waitFor()
  await page.getByText('Entered in error. Nothing of it is used').waitFor()
  await expectNoAxeFindings(page)
  await visit(page, newUrl)
})

it('a sheet for a downtime, and what was written on it entered later with the original time', async () => {
  const { page } = bench
  const studyUrl = page.url()
  await visit(page, `${app.origin}/bench/sheets`)
  await act(page, page.getByRole('link', { name: 'Carpal tunnel, RIGHT' }))
  const sheet = page.locator('[data-test=downtime-sheet]')
  await sheet.getByRole('columnheader', { name: 'amplitude, mV' }).first().waitFor()
  await page.emulateMedia({ media: 'print' })
  expect(await page.getByRole('button', { name: 'Print sheet' }).isVisible()).toBe(false)
  await page.emulateMedia({ media: 'screen' })
  await expectNoAxeFindings(page)

  await visit(page, studyUrl)
  const wrong = page.locator('[data-test=when-wrong]')
  await open(page, wrong)
  await act(page, wrong.getByRole('button', { name: 'Entered later from paper' }))
  const later = page.locator('[data-test=later-entry]')
  const yesterday = new Date(Date.now() - 86_400_000).toISOString().slice(0, 10)
  await later.getByRole('textbox', { name: 'Measured on' }).fill(yesterday)
  await type(page, later.getByLabel('Begun at'), '14:10')
  await later.getByLabel('Measured by').fill('Ida Brandt')
  await type(page, later.getByLabel('Why it is entered later'), 'Power cut.')
  await act(page, later.getByRole('button', { name: 'Note later entry' }))
  await page.locator('[data-test=study-origin]').getByText(/Measured on .*14:10 by Ida Brandt/).waitFor()
  expect((await studyIn(page)).study.studyDate).toBe(yesterday)
})

it('what was measured yesterday goes on today as a second visit, confirmed anew', async () => {
  const { page } = bench
  const wrong = page.locator('[data-test=when-wrong]')
  await open(page, wrong)
  await act(page, wrong.getByRole('button', { name: 'Second visit: go on today' }))
  const visitForm = page.locator('[data-test=second-visit]')
  await tick(page, visitForm.getByLabel(/Name:/))
  await tick(page, visitForm.getByLabel(/Date of birth:/))
  await tick(page, visitForm.getByLabel(/I read the cautions/))
  await type(page, visitForm.getByLabel('Why it goes on'), 'Was too tired.')
  await act(page, visitForm.getByRole('button', { name: 'Go on today' }))
  await page.locator('[data-test=study-origin]').getByText(/^Recorded on .* and /).waitFor()
})

it('a stopped study says why, and its referral is closed or reported, not left open', async () => {
  const { page } = bench
  await act(page, page.getByRole('button', { name: 'Stop the study' }))
  await type(page, page.locator('[data-test=stop]').getByLabel('Reason'), 'Felt faint.')
  await act(page, page.getByRole('button', { name: 'Stop study', exact: true }))
  const after = page.locator('[data-test=after-stop]')
  await after.getByRole('button', { name: 'Send for a technical report' }).waitFor()
  await expectNoAxeFindings(page)
  await act(page, after.getByRole('button', { name: 'Close the referral with a reason' }))
  await type(page, after.getByLabel('Why nothing follows'), 'Comes again in spring; the practice was told.')
  await act(page, after.getByRole('button', { name: 'Close the referral', exact: true }))
  await after.waitFor({ state: 'detached' })
  await page.locator('[data-test=study-origin]').getByText('Stopped: Felt faint.').waitFor()
  expect(bench.problems).toEqual([])
  expect(bench.outside).toEqual([])
})
