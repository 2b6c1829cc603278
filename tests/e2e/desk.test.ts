import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'

/**
 * A referring physician at a telephone of 390 px: refers a patient who has a record that nobody there sees, loses the page
 * in between, is asked and answers; the clinic says who the patient is. A final report is read, acknowledged and doubted.
 */
let app: App
let referrer: Window
let clinic: Window
let number = ''
let known = { familyName: '', givenName: '', birthDate: '', recordNumber: '' }
beforeAll(async () => {
  app = await startApp()
  referrer = await app.open({ width: 390, height: 844 })
  clinic = await app.open()
  await signIn(app, referrer.page, app.person('referring-physician'))
  await signIn(app, clinic.page, app.person('administrator'))
  known = (await (await clinic.context.request.get(`${app.origin}/api/patients?pageSize=1`)).json() as { rows: (typeof known)[] }).rows[0]!
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const button = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: typeof name === 'string' })
const kept = (page: Page) => page.locator('[data-test=kept]').getByText(/draft kept/).waitFor()
const fits = async (page: Page) => expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(390)
/** Goes on by the keyboard alone: Tab until the control has the focus. */
async function tabTo(page: Page, selector: string) {
  for (let presses = 0; presses < 80; presses++) {
    if (await page.evaluate(wanted => document.activeElement?.matches(wanted) ?? false, selector)) return
    await page.keyboard.press('Tab')
  }
  throw new Error(`The focus never reached ${selector}.`)
}

it('a patient is referred within two minutes by the keyboard alone; the draft outlives a reload', async () => {
  const { page } = referrer
  await visit(page, `${app.origin}/desk`)
  await fits(page)
  await expectNoAxeFindings(page)
  await page.getByRole('link', { name: 'Refer a patient' }).press('Enter')
  await page.getByRole('heading', { name: 'Refer a patient' }).waitFor()
  await page.waitForLoadState('networkidle')
  const begun = Date.now()
  await tabTo(page, '[name=familyName]')
  for (const words of [known.familyName, known.givenName, known.birthDate]) {
    await page.keyboard.type(words)
    await page.keyboard.press('Tab')
  }
  await tabTo(page, '[name=phone]')
  await page.keyboard.type('555 0142')
  await tabTo(page, '[name=clinicalQuestion]')
  await page.keyboard.type('Median nerve at the wrist?')
  await kept(page)
  await page.reload()
  await page.waitForLoadState('networkidle')
  expect(await page.getByLabel('Clinical question').inputValue()).toBe('Median nerve at the wrist?')
  expect(await page.getByLabel('Family name').inputValue()).toBe(known.familyName)
  await tabTo(page, '[name=side]')
  await page.keyboard.press('Space')
  await tabTo(page, '[name=symptoms]')
  await page.keyboard.type('Numb at night for four months')
  await tabTo(page, 'button[type=submit]')
  await page.keyboard.press('Enter')
  const summary = page.locator('[data-test=error-summary]')
  await summary.getByText('Enter the examination').waitFor()
  await summary.getByText('Ask about: implanted cardiac device').waitFor()
  await expectNoAxeFindings(page)
  await tabTo(page, '[name=examination]')
  await page.keyboard.type('Thumb opposition weak')
  for (const caution of ['cardiac-device', 'temporary-pacing-wire']) {
    await tabTo(page, `[name="cautions.${caution}"]`)
    await page.keyboard.press('Space')
    await page.keyboard.press('ArrowRight')
  }
  await tabTo(page, '[name=siteId]')
  await page.keyboard.press('ArrowDown')
  await tabTo(page, 'button[type=submit]')
  await page.keyboard.press('Enter')
  await page.locator('[data-test=sent]').waitFor()
  expect(Date.now() - begun).toBeLessThan(120_000)
  number = /REF-\S+/.exec(await page.locator('[data-test=sent] h2').innerText())![0]
  expect(await page.content()).not.toContain(known.recordNumber)
  await expectNoAxeFindings(page)
})

it('the clinic says that the patient has a record, and asks what is missing', async () => {
  const { page } = clinic
  await visit(page, `${app.origin}/intake?state=received&search=${number}`)
  await page.getByText('Say who the patient is').first().waitFor()
  await page.getByRole('row').filter({ hasText: number }).getByRole('link').first().click()
  const panel = page.locator('[data-test=identify]')
  await panel.waitFor()
  await page.waitForLoadState('networkidle')
  await expectNoAxeFindings(page)
  await panel.getByLabel(new RegExp(known.recordNumber)).check()
  await button(page, 'Put the records together').click()
  await panel.getByText('Say how you know that it is one person').first().waitFor()
  await panel.getByLabel('How you know').fill('Asked by telephone: same address')
  await button(page, 'Put the records together').click()
  await panel.waitFor({ state: 'hidden' })
  await page.getByText('said that the patient has this record').waitFor()
  await button(page, 'Return for information').click()
  await page.getByLabel('The side or place is missing').check()
  await page.getByLabel('Another question').check()
  await page.locator('textarea[name=note]').fill('Which hand is worse?')
  await button(page, /^Return/).click()
  await page.getByText('returned').first().waitFor()
})

it('the referring physician answers at the desk, only what is asked, and it comes back by itself', async () => {
  const { page } = referrer
  await visit(page, `${app.origin}/desk`)
  const row = page.getByRole('row').filter({ hasText: number })
  await row.getByText('Which hand is worse?').waitFor()
  await row.getByRole('link', { name: /^Answer/ }).press('Enter')
  await page.getByRole('heading', { name: `Complete referral ${number}` }).waitFor()
  await page.waitForLoadState('networkidle')
  await fits(page)
  await expectNoAxeFindings(page)
  expect(await page.getByLabel('Symptoms').count()).toBe(0)
  await page.getByLabel('LEFT', { exact: true }).check()
  await button(page, 'Send back').press('Enter')
  await page.locator('[data-test=error-summary]').getByText('Answer the question.').waitFor()
  await page.getByLabel('Your answer').fill('The left one')
  await button(page, 'Send back').press('Enter')
  await page.locator('[data-test=letter-done]').waitFor()
  await visit(clinic.page, `${app.origin}/intake?state=received&search=${number}`)
  await clinic.page.getByText('Look at what came back').first().waitFor()
})

it('a final report is read, doubted and acknowledged, and nothing else opens', async () => {
  const { page, context } = referrer
  const { rows } = await (await context.request.get(`${app.origin}/api/desk/referrals?pageSize=100`)).json() as { rows: { reports: { reportId: string, acknowledgedAt: string | null }[] }[] }
  const open = rows.flatMap(row => row.reports)
  const { reportId } = open.find(report => !report.acknowledgedAt) ?? open[0]!
  await visit(page, `${app.origin}/desk/${reportId}`)
  await fits(page)
  await expectNoAxeFindings(page)
  if (!await page.locator('[data-test=acknowledged]').count()) await button(page, 'Acknowledge receipt').press('Enter')
  await page.locator('[data-test=acknowledged]').waitFor()
  await button(page, 'I think this is wrong').press('Enter')
  expect(await page.getByLabel('Your name').count()).toBe(0)
  await page.getByLabel('What looks wrong').fill('The patient is left-handed; does the report know?')
  await button(page, 'Send to the neurologist').press('Enter')
  await page.locator('[data-test=replied]').waitFor()
  expect((await context.request.get(`${app.origin}/api/desk/reports/${reportId}/pdf`)).headers()['content-type']).toBe('application/pdf')
  for (const path of ['/intake', '/directory', '/api/patients', '/api/referrals', `/api/reports/${reportId}`]) expect([path, (await context.request.get(`${app.origin}${path}`)).status()]).toEqual([path, 403])
})

it('nothing went to another address and no page complained', () => {
  for (const window of [referrer, clinic]) {
    expect(window.outside).toEqual([])
    expect(window.problems.filter(text => !/status of (409|422)/.test(text))).toEqual([])
  }
})
