import type { Page } from 'playwright-core'
import { expect } from 'vitest'
import type { StudyView } from '#shared/schemas/bench'
import { signIn, visit, type App, type Window } from './app'
import { bookStudy, type Wish } from './booked-study'

/** A booked study, opened and confirmed by the technologist: ready to type. */
export async function startRecording(app: App, wish: Wish, window: { width?: number, dark?: boolean } = {}): Promise<Window & { studyUrl: string }> {
  const { patientName } = await bookStudy(app, wish)
  const technologist = await app.open(window)
  const { page } = technologist
  await signIn(app, page, app.person('technologist'))
  await visit(page, `${app.origin}/bench`)
  await page.getByRole('button', { name: `Start study: ${patientName}` }).click()
  await page.waitForURL(/\/bench\/[0-9a-f-]{36}$/)
  const confirm = page.locator('[data-test=confirm]')
  await confirm.getByLabel(`Name: ${wish.familyName}`).check()
  await confirm.getByLabel('Date of birth: 20 May 1971').check()
  await confirm.getByLabel(wish.side === 'both' ? 'BOTH SIDES' : wish.side.toUpperCase(), { exact: true }).check()
  await confirm.getByLabel('I read the cautions').check()
  await confirm.getByRole('button', { name: /Confirm/ }).click()
  await confirm.waitFor({ state: 'detached' })
  expect(page.url()).toContain('/bench/')
  return { ...technologist, studyUrl: page.url() }
}

export const cell = (page: Page, label: string) => page.locator(`input[aria-label^="${label}"]`)
export const saved = (page: Page) => page.locator('[data-test=save-state]').getByText(/^saved \d\d:\d\d:\d\d$/).waitFor()
export const studyOf = async (page: Page, studyUrl: string) => await (await page.request.get(studyUrl.replace('/bench/', '/api/studies/'))).json() as StudyView

export async function type(page: Page, label: string, text: string): Promise<void> {
  await cell(page, label).fill(text)
  await cell(page, label).press('Tab')
}

/** A reading of one limb, through the panel. */
export async function addTemperature(page: Page, limb: string, celsius: string, { warmed = false, method = '' } = {}): Promise<void> {
  const panel = page.locator('[data-test=temperatures]')
  await panel.getByLabel('Limb').selectOption({ label: limb })
  await panel.getByLabel('Skin').fill(celsius)
  if (method) await panel.getByLabel('Method').fill(method)
  if (warmed) await panel.getByLabel('after warming').check()
  await panel.getByRole('button', { name: 'Add reading' }).click()
  await panel.getByText(`${celsius} °C`).waitFor()
}
