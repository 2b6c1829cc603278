import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { beginStudy, cell, saved, type } from './recorded-study'

/** Two people, one study: they see each other, and a question is answered while the patient is on the couch. */
let app: App
let bench: Window
let reader: Window
let studyUrl = ''

beforeAll(async () => {
  app = await startApp()
  ;({ technologist: bench, studyUrl } = await beginStudy(app, { familyName: 'Lindqvist' }))
  reader = await app.open()
  await signIn(app, reader.page, app.person('neurologist'))
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

it('people in one study see each other and where the other one is, and what the other stores appears', async () => {
  const { page } = reader
  await visit(page, studyUrl)
  await cell(bench.page, 'RIGHT median motor, elbow, amplitude').focus()
  await page.locator('[data-test=presence]').getByText(/Also in this study: Mirela Oakes \(RIGHT median motor, elbow, amplitude\)/).waitFor()
  await bench.page.locator('[data-test=presence]').getByText('Also in this study').waitFor()
  await type(bench.page, 'RIGHT median motor, wrist, latency, ms', '4.1')
  await saved(bench.page)
  await expect.poll(() => cell(page, 'RIGHT median motor, wrist, latency, ms').inputValue(), { timeout: 20_000 }).toBe('4.1')
  await visit(page, `${app.origin}/shelf`)
  await bench.page.locator('[data-test=presence]').getByText('Also in this study').waitFor({ state: 'detached', timeout: 60_000 })
})

it('a question reaches the reader wherever they are, and the answer the run at once', async () => {
  const { page } = bench
  await visit(reader.page, `${app.origin}/shelf`)
  await cell(page, 'RIGHT median motor, wrist, amplitude').focus()
  const ask = page.locator('[data-test=ask-reader]')
  await ask.getByLabel('Question').fill('Is this amplitude enough?')
  await ask.getByRole('button', { name: 'Ask' }).click()
  const sheet = page.getByRole('region', { name: 'RIGHT median motor' }).first()
  await sheet.getByText('Nobody has opened it yet.').waitFor()

  const strip = reader.page.locator('[data-test=question-strip]')
  await strip.getByText('“Is this amplitude enough?”').waitFor()
  expect(new URL(reader.page.url()).pathname).toBe('/shelf')
  await expectNoAxeFindings(reader.page)
  await strip.getByRole('link', { name: 'Open' }).click()
  await reader.page.locator('[data-test=asked]').getByText('Is this amplitude enough?').waitFor()
  await sheet.getByText(/opened it \d\d:\d\d/).waitFor()
  await expectNoAxeFindings(reader.page)

  const form = reader.page.locator('[data-test=answer-form]')
  await form.getByRole('button', { name: 'Send answer' }).click()
  await form.getByText('Write the answer, or choose a run to add.').first().waitFor()
  await form.getByLabel('Answer').fill('Yes. Record the ulnar as well.')
  await form.getByLabel('Add a run').selectOption('ulnar-motor-fdi')
  await form.getByRole('button', { name: 'Send answer' }).click()
  await reader.page.getByText(/answered .* \d\d:\d\d\./).waitFor()
  await sheet.getByText('Yes. Record the ulnar as well.').waitFor()
  await sheet.getByRole('link', { name: /^added RIGHT ulnar motor/ }).waitFor()
  await page.getByRole('region', { name: /^RIGHT ulnar motor.*FDI|first dorsal/ }).first().waitFor()
  await expectNoAxeFindings(page)
})

it('a question without a reader in the program says so and waits as a task', async () => {
  await reader.context.close()
  const { page } = bench
  const ask = page.locator('[data-test=ask-reader]')
  await expect.poll(async () => {
    await ask.getByLabel('About').selectOption({ label: 'The whole study' })
    await ask.getByLabel('Question').fill('Is anybody there?')
    await ask.getByRole('button', { name: 'Ask' }).click()
    await ask.getByText('“Is anybody there?”').first().waitFor()
    return ask.getByText('No reader has the program open now').isVisible()
  }, { timeout: 30_000, interval: 3_000 }).toBe(true)
  const again = await app.open()
  await signIn(app, again.page, app.person('neurologist'))
  await again.page.getByText(/the bench asked a question and nobody has answered/).first().waitFor()
  await again.page.locator('[data-test=question-strip]').getByText('“Is anybody there?”').first().waitFor()
  expect([...bench.problems, ...again.problems]).toEqual([])
  expect([...bench.outside, ...again.outside]).toEqual([])
})
