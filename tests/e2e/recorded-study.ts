import type { Page } from 'playwright-core'
import { signIn, visit, type App, type Window } from './app'
import { bookStudy } from './booked-study'

interface Wish { familyName: string, protocol?: 'carpal-tunnel' | 'polyneuropathy' }

/** A study that the technologist has begun: booked, started and confirmed. Ready to type into. */
export async function beginStudy(app: App, { familyName, protocol = 'carpal-tunnel' }: Wish): Promise<{ technologist: Window, studyUrl: string }> {
  const { patientName } = await bookStudy(app, { protocol, side: 'both', familyName, question: 'Median nerve at the wrist?' })
  const technologist = await app.open()
  const { page } = technologist
  await signIn(app, page, app.person('technologist'))
  await visit(page, `${app.origin}/bench`)
  await page.getByRole('button', { name: `Start study: ${patientName}` }).click()
  await page.waitForURL(/\/bench\/[0-9a-f-]{36}$/)
  const confirm = page.locator('[data-test=confirm]')
  await confirm.getByLabel(`Name: ${familyName}`).check()
  await confirm.getByLabel('Date of birth: 20 May 1971').check()
  await confirm.getByLabel('BOTH SIDES').check()
  await confirm.getByLabel('I read the cautions').check()
  await confirm.getByRole('button', { name: /Confirm/ }).click()
  await confirm.waitFor({ state: 'detached' })
  return { technologist, studyUrl: page.url() }
}

export const cell = (page: Page, label: string) => page.locator(`input[aria-label^="${label}"]`)
export const saved = (page: Page) => page.locator('[data-test=save-state]').getByText(/^saved \d\d:\d\d:\d\d$/).waitFor()

export async function type(page: Page, label: string, text: string): Promise<void> {
  await cell(page, label).fill(text)
  await cell(page, label).press('Tab')
}
