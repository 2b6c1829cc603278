import type { Page } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { routePatient, routeRuns } from './route-study'

/**
 * One referral on its whole way: entered, accepted, booked, recorded, returned, corrected, signed, mailed, acknowledged.
 * Every figure of the study is expected by name; nothing else may be flagged.
 */
let app: App
let administrator: Window
let technologist: Window
let neurologist: Window
let referralPath = ''
let studyPath = ''

beforeAll(async () => {
  app = await startApp()
  administrator = await app.open()
  technologist = await app.open()
  neurologist = await app.open()
})
afterAll(() => app.close())

const button = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: typeof name === 'string' })
const cell = (page: Page, side: string, title: string, site: string, column: string) => page.locator(`input[aria-label^="${side} ${title}, ${site}, ${column}"]`)

it('the administrator enters an incomplete referral and sees what is missing', async () => {
  const { page } = administrator
  await signIn(app, page, app.person('administrator'))
  await visit(page, `${app.origin}/intake`)
  await expectNoAxeFindings(page)
  await page.getByRole('link', { name: 'New referral' }).click()
  await page.getByLabel('Find the patient').fill(`${routePatient.familyName} ${routePatient.givenName}`)
  await button(page, 'None of these: make a new record').click()
  await page.getByLabel('Date of birth').fill(routePatient.birthDate)
  await page.getByLabel('woman').check()
  await expectNoAxeFindings(page)
  await button(page, 'Make record').click()
  await page.getByLabel('Site that takes the referral').selectOption({ label: 'Harrowmere Clinic, Harrowmere' })
  await button(page, 'Begin referral').click()
  await page.waitForURL(/\/intake\/[0-9a-f-]{36}$/)
  referralPath = new URL(page.url()).pathname
  await page.getByLabel('Clinical question').fill('Carpal tunnel, worse on the right?')
  await button(page, 'Save draft').click()
  const missing = page.locator('[data-test=missing]')
  await missing.getByText('Choose the side.').waitFor()
  expect(await missing.getByText('Choose the referring physician.').count()).toBe(1)
  await expectNoAxeFindings(page)
})

it('completes it with a letter, accepts it with a protocol and books it for today', async () => {
  const { page } = administrator
  await page.getByRole('group', { name: 'Side', exact: true }).getByLabel('both sides').check()
  await page.getByLabel('Referring physician').fill('Whitcombe')
  await button(page, /Dr Orla Whitcombe/).click()
  await page.getByLabel('Symptoms').fill('Numb thumb to middle fingers for six months, worse at night, right more than left.')
  await page.getByLabel('Examination').fill('Reduced touch on digits 1 to 3 on the right. Power normal.')
  for (const group of await page.getByRole('group').filter({ has: page.locator('input[name^="cautions."]') }).all()) {
    const no = group.getByLabel('no', { exact: true })
    if (await no.count() === 1) await no.check()
  }
  await button(page, 'Save draft').click()
  await page.getByText('Missing before it can be accepted').waitFor({ state: 'detached' })

  await page.locator('input[type=file]').setInputFiles({ name: 'letter.pdf', mimeType: 'application/pdf', buffer: onePagePdf() })
  await page.getByText('letter.pdf').first().waitFor()
  await page.locator('input[type=file]').setInputFiles({ name: 'holiday.pdf', mimeType: 'application/pdf', buffer: Buffer.from('<html>not a PDF</html>') })
  await page.getByText('not a PDF, PNG or JPEG').first().waitFor()

  await button(page, 'Receive').click()
  await page.getByLabel('Protocol').selectOption({ label: 'Carpal tunnel' })
  await button(page, 'Accept referral').click()
  const booking = page.locator('[data-test=booking]')
  await booking.getByLabel('Date').fill(today())
  await booking.getByLabel('Date').press('Tab')
  await booking.getByLabel('Room').selectOption('Room 2')
  await booking.getByLabel('Time').fill('23:00')
  await booking.getByLabel('Length').selectOption({ index: 0 })
  await button(page, /^Book/).click()
  await page.getByText('Booked', { exact: true }).waitFor()
  await expectNoAxeFindings(page)
})

it('the technologist confirms identity, side and cautions', async () => {
  const { page } = technologist
  await signIn(app, page, app.person('technologist'))
  await visit(page, `${app.origin}/bench`)
  await expectNoAxeFindings(page)
  const row = page.getByRole('row').filter({ hasText: routePatient.familyName })
  await row.getByRole('button', { name: /Arriv|Here/ }).click()
  await row.getByRole('button', { name: /Start study/ }).click()
  await page.waitForURL(/\/bench\/[0-9a-f-]{36}$/)
  studyPath = new URL(page.url()).pathname.replace('/bench/', '')
  const confirm = page.locator('[data-test=confirm]')
  await confirm.getByLabel(/^Name:/).check()
  await confirm.getByLabel(/^Date of birth:/).check()
  await confirm.getByLabel('BOTH SIDES').check()
  await confirm.getByLabel('I read the cautions').check()
  await expectNoAxeFindings(page)
  await confirm.getByRole('button', { name: /Confirm/ }).click()
  await confirm.waitFor({ state: 'detached' })
})

it('types the study; velocities, limits and flags appear in the row', async () => {
  const { page } = technologist
  await page.locator('[data-test=body-size]').getByLabel('Height').fill('162')
  await page.locator('[data-test=body-size]').getByLabel('Weight').fill('74')
  await page.locator('[data-test=body-size]').getByLabel('Weight').press('Tab')
  await page.getByText('BMI 28.2').waitFor()
  for (const [side, celsius] of [['RIGHT hand', '32.6'], ['LEFT hand', '32.4']] as const) {
    const panel = page.locator('[data-test=temperatures]')
    await panel.getByLabel('Limb').selectOption({ label: side })
    await panel.getByLabel('Skin').fill(celsius)
    await panel.getByRole('button', { name: 'Add reading' }).click()
    await panel.getByText(`${celsius} °C`).waitFor()
  }
  for (const run of routeRuns) {
    for (const row of run.rows) {
      for (const [column, text] of Object.entries(row.cells)) {
        const input = cell(page, run.side, run.title, row.site, column)
        await input.fill(text)
        await input.press('Tab')
      }
    }
  }
  expect(await velocities(page)).toEqual(['54', '37', '52', '59', '59', '54', '47', '50'])
  expect(await cell(page, 'RIGHT', 'median motor', 'wrist', 'latency').getAttribute('aria-label')).toContain('above the upper limit 4.4')
  expect(await cell(page, 'RIGHT', 'median sensory, digit 2', 'wrist', 'onset').getAttribute('aria-label')).toContain('above the upper limit 3.3')
  expect(await cell(page, 'RIGHT', 'median sensory, digit 2', 'wrist', 'peak').getAttribute('aria-label')).toContain('above the upper limit 4.0')
  await page.getByText(/saved \d\d:\d\d:\d\d/).first().waitFor()
  await expectNoAxeFindings(page)
})

/** The computed velocities in the order of the runs, without their uncertainty. */
async function velocities(page: Page): Promise<string[]> {
  const seen: string[] = []
  for (const { side, title, technique, rows } of routeRuns) {
    for (const { site } of technique.includes('motor') ? rows.slice(1) : rows) {
      const row = page.getByRole('row').filter({ has: cell(page, side, title, site, 'distance') })
      seen.push(/\d+/.exec(await row.locator('td.calc').first().innerText())?.[0] ?? 'none')
    }
  }
  return seen
}

const today = () => new Intl.DateTimeFormat('en-CA', { timeZone: 'Europe/Prague' }).format(new Date())

/** The smallest PDF that every checker takes: one blank page. */
function onePagePdf(): Buffer {
  const parts = ['%PDF-1.4\n', '1 0 obj<</Type/Catalog/Pages 2 0 R>>endobj\n', '2 0 obj<</Type/Pages/Kids[3 0 R]/Count 1>>endobj\n', '3 0 obj<</Type/Page/Parent 2 0 R/MediaBox[0 0 200 200]>>endobj\n']
  let at = parts[0]!.length
  const offsets = parts.slice(1).map((part) => {
    const here = at
    at += part.length
    return here
  })
  const table = offsets.map(offset => `${String(offset).padStart(10, '0')} 00000 n \n`).join('')
  return Buffer.from(`${parts.join('')}xref\n0 4\n0000000000 65535 f \n${table}trailer<</Size 4/Root 1 0 R>>\nstartxref\n${at}\n%%EOF\n`)
}
