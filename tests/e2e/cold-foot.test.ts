import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { addTemperature, cell, saved, startRecording, studyOf, type } from './bench-start'

/**
 * The story of the cold foot: 27.8 °C, slow, not interpretable; warmed by the clock, repeated at 31 °C; the first run is
 * kept, struck through, and out of flags and draft. With it the slips of a hurried hand, each with its question.
 */
let app: App
let technologist: Window & { studyUrl: string }

beforeAll(async () => {
  app = await startApp()
  technologist = await startRecording(app, { protocol: 'polyneuropathy', side: 'both', familyName: 'Kjellberg', question: 'Polyneuropathy?' })
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const sural = (page: Page) => page.getByRole('region', { name: 'RIGHT sural sensory' })

async function typeRow(page: Page, sheet: ReturnType<Page['locator']>, texts: readonly string[]): Promise<void> {
  for (const [index, text] of texts.entries()) {
    await sheet.locator('tbody input').nth(index).fill(text)
    await sheet.locator('tbody input').nth(index).press('Tab')
  }
  await saved(page)
}
/** The right sural runs as the server assesses them. */
async function suralRuns(page: Page) {
  const { study, assessment } = await studyOf(page, technologist.studyUrl)
  return study.runs.filter(run => run.side === 'right' && run.technique === 'sural').map((run) => {
    const assessed = assessment.runs.find(each => each.runId === run.id)!
    return { onset: run.rows[0]!.values.onsetLatencyMs, repeats: Boolean(run.repeats), superseded: Boolean(assessed.supersededBy), flagged: assessed.results.filter(result => result.flagged).map(result => result.quantity), told: assessment.findings.some(finding => finding.runIds.includes(run.id)) }
  })
}

it('a limb without a temperature is said on the route strip and beside the run', async () => {
  const { page } = technologist
  await page.locator('[data-test=route-strip]').getByText(/no temperature of .*RIGHT foot/).waitFor()
  await typeRow(page, sural(page), ['4.6', '5.4', '6', '140'])
  await sural(page).getByText('no foot temperature').waitFor()
  expect((await suralRuns(page))[0]).toMatchObject({ onset: 4.6, flagged: [] })
})

it.each([
  { label: 'RIGHT sural sensory, calf, amplitude, µV', text: '0.006', question: 'Was 0.006 read in mV?' },
  { label: 'RIGHT fibular motor, below fibular head, distance, mm', text: '33', question: 'Was 33 read in cm?' },
])('$text in $label is stopped with its question, never converted, and taken back by Escape', async ({ label, text, question }) => {
  const { page } = technologist
  const before = await cell(page, label).inputValue()
  await type(page, label, text)
  await page.getByRole('alert').filter({ hasText: question }).waitFor()
  await expect.poll(async () => [await cell(page, label).getAttribute('aria-invalid'), await cell(page, label).inputValue()], { timeout: 20_000 }).toEqual(['true', text])
  await cell(page, label).press('Escape')
  await page.getByRole('alert').filter({ hasText: question }).waitFor({ state: 'detached' })
  expect(await cell(page, label).inputValue()).toBe(before)
})

it('530 mm is taken and questioned at the cell; kept with a reason; another value asks again at once', async () => {
  const { page } = technologist
  const label = 'RIGHT fibular motor, below fibular head, distance, mm'
  await type(page, label, '530')
  await saved(page)
  await expect.poll(() => page.locator('input[aria-label*="below fibular head, distance, mm"]').first().getAttribute('aria-label'), { timeout: 20_000 }).toContain('questioned')
  const question = page.locator('[data-test=remarks] li').filter({ hasText: '530 was entered' })
  await cell(page, label).press('?')
  await page.keyboard.press('Enter')
  await question.getByLabel('It is right, because').fill('Very tall, measured twice.')
  await page.keyboard.press('Enter')
  await question.getByText('Kept: Very tall, measured twice.').waitFor()
  expect(await page.evaluate(() => document.activeElement?.getAttribute('aria-label'))).toContain('below fibular head, distance')
  await type(page, label, '540')
  // Before anything was saved or loaded again.
  await page.locator('[data-test=remarks] li').filter({ hasText: /^Check: .*540 was entered/ }).waitFor()
  await saved(page)
  expect((await studyOf(page, technologist.studyUrl)).study.keptChecks).toEqual([])
  await type(page, label, '330')
  await saved(page)
})

it('at 27.8 °C slowness is not interpretable', async () => {
  const { page } = technologist
  await addTemperature(page, 'RIGHT foot', '27.8', { method: 'infrared' })
  await sural(page).getByText('cold, not interpretable').waitFor()
  await page.locator('[data-test=temperatures]').getByText(/\d\d:\d\d, infrared/).waitFor()
  expect((await suralRuns(page))[0]).toMatchObject({ flagged: [], superseded: false, told: true })
  await expectNoAxeFindings(page)
})

it('the clock of warming says how long, survives a reload, and reminds', async () => {
  const { page } = technologist
  const warming = page.locator('[data-test=warming]')
  expect(await warming.getByLabel('Time').inputValue()).toBe('25')
  await warming.getByRole('button', { name: 'Start: RIGHT foot' }).click()
  await warming.getByText(/RIGHT foot, warming for 25 min: (25:00|24:5\d) left/).waitFor()
  await visit(page, technologist.studyUrl)
  await warming.getByText(/warming for 25 min: 2[45]:\d\d left/).waitFor()
  await page.evaluate(() => {
    for (const key of Object.keys(localStorage).filter(name => name.startsWith('orthodrome-warming'))) {
      const list = JSON.parse(localStorage.getItem(key)!) as { startedAt: string }[]
      localStorage.setItem(key, JSON.stringify(list.map(each => ({ ...each, startedAt: new Date(Date.now() - 26 * 60_000).toISOString() }))))
    }
  })
  await visit(page, technologist.studyUrl)
  await warming.getByRole('alert').filter({ hasText: 'time is over since 1 min' }).waitFor()
  await warming.getByRole('button', { name: 'Measure again' }).click()
  expect(await page.evaluate(() => (document.activeElement as HTMLInputElement).name)).toBe('temperature-celsius')
  await warming.getByRole('button', { name: 'End the clock of the RIGHT foot' }).click()
})

it('repeated at 31 °C: the first run is kept, struck through, out of flags and draft', async () => {
  const { page } = technologist
  await addTemperature(page, 'RIGHT foot', '31.0', { warmed: true })
  await sural(page).first().getByText('cold, not interpretable').waitFor()
  await sural(page).first().getByRole('button', { name: 'Repeat warm: RIGHT sural sensory' }).click()
  const second = sural(page).nth(1)
  await second.waitFor()
  expect(await second.locator('tbody input').evaluateAll(inputs => inputs.map(input => (input as HTMLInputElement).value).join(''))).toBe('')
  await typeRow(page, second, ['3.9', '4.8', '6', '140'])
  await sural(page).first().getByText('repeated warm: this run is kept and not used').waitFor()
  await expect.poll(() => sural(page).first().locator('tbody').evaluate(body => getComputedStyle(body).textDecorationLine), { timeout: 20_000 }).toBe('line-through')
  const [kept, used] = await suralRuns(page)
  expect(kept).toMatchObject({ onset: 4.6, superseded: true, flagged: [], told: false })
  expect(used).toMatchObject({ onset: 3.9, repeats: true, superseded: false, flagged: ['onsetLatencyMs', 'peakLatencyMs'], told: true })
})

it('the reader sees the cold run struck through, and no flag of it', async () => {
  const { page } = technologist
  const reader = await app.open()
  await signIn(app, reader.page, app.person('neurologist'))
  await visit(reader.page, technologist.studyUrl)
  expect(await sural(reader.page).first().locator('tbody').evaluate(body => getComputedStyle(body).textDecorationLine)).toBe('line-through')
  expect(technologist.problems.filter(text => !/status of 422/.test(text))).toEqual([])
  await page.close()
  await reader.context.close()
})
