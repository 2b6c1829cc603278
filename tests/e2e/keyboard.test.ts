import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { freshCode, startApp, visit, type App, type DemoPerson, type Window } from './app'
import { bookStudy } from './booked-study'
import { expectFocus, focused, press, tabTo } from './keyboard'

/** One study by the keyboard alone, from the day list to the signature: no mouse, and the focus always seen and never lost. */
let app: App
let technologist: Window
let neurologist: Window
let patientName = ''

beforeAll(async () => {
  app = await startApp()
  patientName = (await bookStudy(app, { protocol: 'carpal-tunnel', side: 'right', familyName: 'Aldersey', question: 'Carpal tunnel on the right?' })).patientName
  technologist = await app.open()
  neurologist = await app.open()
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

async function signInByKeys(page: Page, { email, password, totpSecret }: DemoPerson): Promise<void> {
  await visit(page, `${app.origin}/sign-in`)
  await page.keyboard.press('Tab')
  await tabTo(page, /^E-mail address/)
  await page.keyboard.type(email)
  await tabTo(page, /^Password$/)
  await page.keyboard.type(password)
  await tabTo(page, /^Code/)
  if (totpSecret) await page.keyboard.type(await freshCode(totpSecret))
  await page.keyboard.press('Enter')
  await page.waitForURL(url => !url.pathname.startsWith('/sign-in'))
  await page.waitForLoadState('networkidle')
}

it('the technologist opens the booked study from the day list and confirms who lies here', async () => {
  const { page } = technologist
  await signInByKeys(page, app.person('technologist'))
  await visit(page, `${app.origin}/bench`)
  await page.keyboard.press('Tab')
  await tabTo(page, new RegExp(`^Start study: ${patientName}`))
  await page.keyboard.press('Enter')
  await page.waitForURL(/\/bench\/[0-9a-f-]{36}$/)
  await page.locator('[data-test=confirm]').waitFor()
  await tabTo(page, /^Name: Aldersey/)
  await page.keyboard.press('Space')
  await tabTo(page, /^Date of birth:/)
  await page.keyboard.press('Space')
  await tabTo(page, /^RIGHT$/)
  await page.keyboard.press('Space')
  await tabTo(page, /^I read the cautions/)
  await page.keyboard.press('Space')
  await tabTo(page, /^Confirm/)
  await page.keyboard.press('Enter')
  await page.locator('[data-test=confirm]').waitFor({ state: 'detached' })
  await expectFocus(page, /^RIGHT median motor, wrist, latency, ms/)
})

it('types runs: decimal comma, Enter down, arrows, Tab along, n for no response, Ctrl Z back', async () => {
  const { page } = technologist
  await page.keyboard.type('3,9')
  await page.keyboard.press('Enter')
  await expectFocus(page, /^RIGHT median motor, elbow, latency/)
  await page.keyboard.type('8,0')
  await page.keyboard.press('ArrowUp')
  expect((await expectFocus(page, /^RIGHT median motor, wrist, latency/)).value).toBe('3.9')
  await press(page, 'Tab')
  await expectFocus(page, /wrist, amplitude/)
  await page.keyboard.type('7,2')
  await press(page, 'ArrowDown')
  await expectFocus(page, /elbow, amplitude/)
  await page.keyboard.type('7')
  await press(page, 'Tab')
  await alongTo(page, /elbow, distance/)
  await page.keyboard.type('221')
  await press(page, 'ArrowUp')
  await expectFocus(page, /wrist, distance/)
  // A space puts in the method's own distance.
  await press(page, 'Space')
  expect((await focused(page)).value).toBe('80')
  await expect.poll(() => velocityOf(page), { timeout: 20_000 }).toBe('54')

  await alongTo(page, /^RIGHT median sensory, digit 2, wrist, onset/)
  await press(page, 'n')
  expect((await focused(page)).value).toBe('no response')
  await press(page, 'Control+z')
  expect(await expectFocus(page, /^RIGHT median sensory, digit 2, wrist, onset/)).toMatchObject({ value: '' })
  await press(page, 'n', 'Enter')
  await expectFocus(page, /^RIGHT ulnar sensory, digit 5, wrist, onset/)
  for (const [text, next] of [['2,7', /peak/], ['3,3', /amplitude/], ['14', /distance/]] as const) {
    await page.keyboard.type(text)
    await press(page, 'Tab')
    await expectFocus(page, next)
  }
  await press(page, 'Space')
  await alongTo(page, /^RIGHT ulnar motor, wrist, latency/)
  await press(page, 'd', 'Enter', 'd', 'Enter', 'd', 'Tab')
  await page.locator('[data-test=save-state]').getByText(/^saved/).waitFor()
})

it('hands over', async () => {
  const { page } = technologist
  await tabTo(page, /^Hand over$/, { most: 60 })
  await press(page, 'Enter')
  await expectFocus(page, /^(Missing or unusual|Nothing is missing)$/)
  await tabTo(page, /^Hand over to the reader$/)
  await press(page, 'Enter')
  await page.locator('[data-test=hand-over]').waitFor({ state: 'detached' })
  await expectFocus(page, /^Handed over/)
})

it('the neurologist takes the study from the queue', async () => {
  const { page } = neurologist
  await signInByKeys(page, app.person('neurologist'))
  await visit(page, `${app.origin}/reading`)
  // The first study of the queue has the focus on arrival; arrows walk down the list.
  for (let row = 0; !(await expectFocus(page)).name.startsWith(patientName); row++) {
    if (row > 30) throw new Error('The arrows did not lead to the study.')
    await press(page, 'ArrowDown')
  }
  await tabTo(page, new RegExp(`^Take ${patientName}`), { most: 4 })
  await press(page, 'Enter')
  await page.waitForURL(/\/reading\/[0-9a-f-]{36}$/)
  await page.getByRole('heading', { name: 'Impression' }).waitFor()
  await page.waitForFunction(() => document.activeElement !== document.body)
  await expectFocus(page)
})

it('writes impression and limitation, answers what is asked, and signs', async () => {
  const { page } = neurologist
  await tabTo(page, /^To the report text/)
  await press(page, 'Enter')
  await expectFocus(page, /^Impression/)
  await tabTo(page, /^Line 1, in your words/)
  await page.keyboard.type('RIGHT median neuropathy at the wrist.')
  await tabTo(page, /^About/)
  await page.keyboard.type('median')
  await tabTo(page, /^RIGHT$/)
  await press(page, 'Space')
  await tabTo(page, /^abnormal$/)
  await press(page, 'Space')
  await tabTo(page, /^Clinical correlation/)
  await page.keyboard.type('Fits the history.')
  await tabTo(page, /^Small fibres are not assessed/)
  await press(page, 'Space')
  await page.locator('[data-test=draft-saving]').getByText(/saved \d\d:\d\d:\d\d/).waitFor()
  await answerChecks(page)
  await tabTo(page, /^Mark ready to sign/)
  await press(page, 'Enter')
  await page.getByText('ready to sign', { exact: true }).waitFor()
  await page.waitForFunction(() => document.activeElement?.closest('#sign'))
  await tabTo(page, /^I reviewed the data/)
  await press(page, 'Space')
  await tabTo(page, /^Your password, again/)
  await page.keyboard.type(app.person('neurologist').password)
  await press(page, 'Enter')
  await page.locator('[data-test=signed]').waitFor()
  await page.waitForFunction(() => document.activeElement !== document.body)
  await tabTo(page, /^Open the report$/)
  await press(page, 'Enter')
  await page.waitForURL(/\/reports\//)
  await page.getByRole('heading', { name: 'Impression' }).waitFor()
  expect(await page.locator('main').innerText()).toContain('RIGHT median neuropathy at the wrist.')
})

it('no page complained', () => {
  for (const { problems, outside } of [technologist, neurologist]) expect([...problems, ...outside]).toEqual([])
})

/** Along the cells of the grid by Tab. */
const alongTo = (page: Page, name: RegExp) => tabTo(page, name, { most: 20 })

/** The computed velocity of the first run. */
async function velocityOf(page: Page): Promise<string> {
  return /\d+/.exec(await page.getByRole('region', { name: 'RIGHT median motor' }).locator('tbody tr').nth(1).locator('td.calc').first().innerText())?.[0] ?? 'none'
}

/** Every question before signing, with a reason. */
async function answerChecks(page: Page): Promise<void> {
  for (let round = 0; await page.locator('[data-test=check-check]').getByRole('button', { name: 'Answer with a reason' }).count() > 0; round++) {
    if (round > 12) throw new Error('The questions before signing do not end.')
    await tabTo(page, /^Answer with a reason$/)
    await press(page, 'Enter')
    await expectFocus(page, /^Reason/)
    await page.keyboard.type('Seen; not needed for the question.')
    await press(page, 'Enter')
    await expectFocus(page)
    await page.waitForTimeout(800)
  }
}
