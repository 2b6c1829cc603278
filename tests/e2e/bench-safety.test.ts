import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import type { StudyView } from '#shared/schemas/bench'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { bookStudy } from './booked-study'
import { expectFocus } from './keyboard'

/** What the bench must not let happen: a slip taken for a value, a typed value lost, slowness of a cold limb called disease. */
let app: App
let technologist: Window
let studyUrl = ''

/** One that was not asked, and one whose answer is another today: with a wire in place nothing goes on until it is corrected. */
async function askCautions(page: Page): Promise<void> {
  const cautions = page.locator('[data-test=cautions]')
  await cautions.getByRole('group', { name: 'Lymphoedema' }).getByLabel('yes').focus()
  await page.keyboard.press('Space')
  await page.getByText('lymphoedema', { exact: true }).waitFor()
  await expectFocus(page, /^Correct ?: Lymphoedema/)
  const wire = 'Temporary pacing wire or other external cardiac lead'
  for (const [answer, state] of [['yes', 'detached'], ['no', 'visible']] as const) {
    await cautions.getByRole('button', { name: new RegExp(`^Correct ?: ${wire}`) }).click()
    await cautions.getByRole('group', { name: wire }).getByLabel(answer).check()
    await page.getByRole('button', { name: 'Confirm and record' }).waitFor({ state })
    await expectNoAxeFindings(page)
  }
}

beforeAll(async () => {
  app = await startApp()
  const { referralId, patientName } = await bookStudy(app, { protocol: 'polyneuropathy', side: 'both', familyName: 'Tollefsen', question: 'Polyneuropathy?' })
  technologist = await app.open()
  const { page } = technologist
  await signIn(app, page, app.person('technologist'))
  await visit(page, `${app.origin}/bench`)
  await page.getByRole('button', { name: `Start study: ${patientName}` }).click()
  await page.waitForURL(/\/bench\/[0-9a-f-]{36}$/)
  studyUrl = page.url()
  const confirm = page.locator('[data-test=confirm]')
  await confirm.getByLabel('Name: Tollefsen').check()
  await confirm.getByLabel('Date of birth: 20 May 1971').check()
  await confirm.getByLabel('BOTH SIDES').check()
  await askCautions(page)
  await confirm.getByLabel('I read the cautions').check()
  await confirm.getByRole('button', { name: /Confirm/ }).click()
  await confirm.waitFor({ state: 'detached' })
  expect(referralId).not.toBe('')
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const cell = (page: Page, label: string) => page.locator(`input[aria-label^="${label}"]`)
const saved = (page: Page) => page.locator('[data-test=save-state]').getByText(/^saved \d\d:\d\d:\d\d$/).waitFor()
const studyOf = async (page: Page) => await (await page.request.get(studyUrl.replace('/bench/', '/api/studies/'))).json() as StudyView

async function type(page: Page, label: string, text: string): Promise<void> {
  await cell(page, label).fill(text)
  await cell(page, label).press('Tab')
}

it('0.006 in a column of microvolts is stopped with the question, and never converted', async () => {
  const { page } = technologist
  const label = 'RIGHT sural sensory, calf, amplitude, µV'
  await type(page, label, '0.006')
  await page.getByRole('alert').filter({ hasText: 'Was 0.006 read in mV?' }).waitFor()
  await expect.poll(() => cell(page, label).getAttribute('aria-invalid'), { timeout: 20_000 }).toBe('true')
  expect(await cell(page, label).inputValue()).toBe('0.006')
  await visit(page, studyUrl)
  expect(await cell(page, label).inputValue()).toBe('')
  await type(page, label, '6')
  await saved(page)
})

it('33 mm for a segment of the leg is stopped: centimetres?', async () => {
  const { page } = technologist
  const label = 'RIGHT fibular motor, below fibular head, distance, mm'
  await type(page, label, '33')
  await page.getByRole('alert').filter({ hasText: 'Was 33 read in cm?' }).waitFor()
  await cell(page, label).press('Escape')
  await page.getByRole('alert').filter({ hasText: 'Was 33 read in cm?' }).waitFor({ state: 'detached' })
  expect(await cell(page, label).inputValue()).toBe('')
})

it('530 mm for the same segment is taken and questioned', async () => {
  const { page } = technologist
  await type(page, 'RIGHT fibular motor, below fibular head, distance, mm', '530')
  await page.getByText(/^Check: .*530 was entered/).waitFor()
  await saved(page)
})

it('a broken network keeps what is typed, says so, and stores it when it is back', async () => {
  const { page, context } = technologist
  await context.setOffline(true)
  await type(page, 'RIGHT fibular motor, ankle, latency, ms', '4.8')
  await type(page, 'RIGHT fibular motor, ankle, amplitude, mV', '3.2')
  await page.locator('[data-test=save-state]').getByText('2 values not saved yet, kept on this device and tried again').waitFor()
  expect(await cell(page, 'RIGHT fibular motor, ankle, latency').inputValue()).toBe('4.8')
  await context.setOffline(false)
  await saved(page)
  await visit(page, studyUrl)
  expect(await cell(page, 'RIGHT fibular motor, ankle, latency').inputValue()).toBe('4.8')
  expect(await cell(page, 'RIGHT fibular motor, ankle, amplitude').inputValue()).toBe('3.2')
})

it('a killed server loses nothing that was typed before, during and after', async () => {
  const { page } = technologist
  await type(page, 'RIGHT tibial motor, ankle, latency, ms', '4.1')
  await saved(page)
  await app.kill('SIGKILL')
  await type(page, 'RIGHT tibial motor, ankle, amplitude, mV', '7.3')
  await page.locator('[data-test=save-state]').getByText('1 value not saved yet').waitFor()
  await type(page, 'RIGHT tibial motor, popliteal fossa, latency, ms', '12.4')
  await app.restart()
  await page.locator('[data-test=save-state]').getByRole('button', { name: 'Try now' }).click()
  await saved(page)
  await visit(page, studyUrl)
  const values = await Promise.all(['ankle, latency', 'ankle, amplitude', 'popliteal fossa, latency'].map(each => cell(page, `RIGHT tibial motor, ${each}`).inputValue()))
  expect(values).toEqual(['4.1', '7.3', '12.4'])
})

it('a server that is restarted on purpose ends no session, and the page goes on', async () => {
  const { page } = technologist
  // The line of events has to stand, or nothing could be said by it.
  await page.waitForResponse(response => response.url().includes('/presence') && response.ok())
  await page.waitForTimeout(3000)
  await app.kill('SIGTERM')
  await type(page, 'RIGHT tibial motor, popliteal fossa, amplitude, mV', '6.1')
  await page.locator('[data-test=save-state]').getByText('1 value not saved yet').waitFor()
  await app.restart()
  await page.locator('[data-test=save-state]').getByRole('button', { name: 'Try now' }).click()
  await saved(page)
  expect(await page.getByText('You are signed out.').count()).toBe(0)
})

it('two people at one cell: both values are shown and one is chosen', async () => {
  const { page } = technologist
  const other = await app.open()
  await signIn(app, other.page, app.person('neurologist'))
  await visit(other.page, studyUrl)
  const label = 'LEFT tibial motor, ankle, latency, ms'
  await type(page, label, '4.0')
  await saved(page)
  await type(other.page, label, '4.4')
  const conflict = other.page.locator('[data-test=conflicts]')
  await conflict.getByText(/you typed 4\.4, Mirela Oakes stored 4/).waitFor()
  expect((await studyOf(page)).study.runs.find(run => run.side === 'left' && run.technique === 'tibial-motor-ah')?.rows[0]?.values.latencyMs).toBe(4)
  await conflict.getByRole('button', { name: 'Keep mine, 4.4' }).click()
  await conflict.waitFor({ state: 'detached' })
  await saved(other.page)
  await visit(page, studyUrl)
  expect(await cell(page, label).inputValue()).toBe('4.4')
  await other.context.close()
})

it('slow in a cold foot is not interpretable; repeated warm, the first run is kept, struck through and out of the flags', async () => {
  const { page } = technologist
  await addTemperature(page, '27.8')
  await typeSural(page, page.getByRole('region', { name: 'RIGHT sural sensory' }).first(), ['4.6', '5.4', '6', '140'])
  const first = page.getByRole('region', { name: 'RIGHT sural sensory' }).first()
  await first.getByText('cold, not interpretable').waitFor()
  expect((await suralRuns(page))[0]!.flagged).toEqual([])

  await addTemperature(page, '31.0', { warmed: true })
  await first.getByText('cold, not interpretable').waitFor()
  await first.getByRole('button', { name: 'Notes, steps: RIGHT sural sensory' }).click()
  await first.getByRole('button', { name: 'Record again' }).click()
  const second = page.getByRole('region', { name: 'RIGHT sural sensory' }).nth(1)
  await typeSural(page, second, ['3.9', '4.8', '6', '140'])
  await first.getByText('repeated warm: this run is kept and not used').waitFor()
  await expect.poll(() => first.locator('tbody').evaluate(body => getComputedStyle(body).textDecorationLine), { timeout: 20_000 }).toBe('line-through')
  const [kept, used] = await suralRuns(page)
  expect(kept).toMatchObject({ onset: 4.6, superseded: true, flagged: [] })
  expect(used).toMatchObject({ onset: 3.9, superseded: false, flagged: ['onsetLatencyMs', 'peakLatencyMs'] })
})

/** A temperature of the right foot. */
async function addTemperature(page: Page, celsius: string, { warmed = false } = {}): Promise<void> {
  const panel = page.locator('[data-test=temperatures]')
  await panel.getByLabel('Limb').selectOption({ label: 'RIGHT foot' })
  await panel.getByLabel('Skin').fill(celsius)
  if (warmed) await panel.getByLabel('after warming').check()
  await panel.getByRole('button', { name: 'Add reading' }).click()
  await panel.getByText(`${celsius} °C`).waitFor()
}

async function typeSural(page: Page, sheet: ReturnType<Page['locator']>, texts: readonly string[]): Promise<void> {
  for (const [index, text] of texts.entries()) {
    const input = sheet.locator('tbody input').nth(index)
    await input.fill(text)
    await input.press('Tab')
  }
  await saved(page)
}

/** The right sural runs as the server assesses them, in their order. */
async function suralRuns(page: Page) {
  const { study, assessment } = await studyOf(page)
  return study.runs.filter(run => run.side === 'right' && run.technique === 'sural').map((run) => {
    const assessed = assessment.runs.find(each => each.runId === run.id)!
    return { onset: run.rows[0]!.values.onsetLatencyMs, superseded: Boolean(assessed.supersededBy), flagged: assessed.results.filter(result => result.flagged).map(result => result.quantity) }
  })
}
