import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { ownSetColumns } from '#shared/schemas/own-set'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'

/**
 * The administrator imports a table with three errors, corrects it and proposes it; another person approves. The same
 * person twice in the register is put together and taken apart. Referrals come from a file. The overview counts.
 */
let app: App
let administrator: Window
let director: Window
const files = mkdtempSync(join(tmpdir(), 'orthodrome-files-'))
const button = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: typeof name === 'string' })

function file(name: string, text: string): string {
  const path = join(files, name)
  writeFileSync(path, text)
  return path
}
const line = (changes: Record<string, string>) => ({ technique: 'median-motor-apb', quantity: 'latencyMs', at: 'wrist', distance_mm: '80', unit: 'ms', bound: 'upper', value: '4.6', age_min: '18', age_max: '79', ...changes })
const table = (lines: Record<string, string>[]) => [ownSetColumns.join(','), ...lines.map(each => ownSetColumns.map(column => each[column] ?? '').join(','))].join('\n')

beforeAll(async () => {
  app = await startApp()
  administrator = await app.open()
  director = await app.open()
  await signIn(app, administrator.page, app.person('administrator'))
})
afterAll(async () => {
  rmSync(files, { recursive: true, force: true })
  await app.close()
})
afterEach(context => app.onFailure(context))

it('a table with three errors is refused line by line', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/shelf/import`)
  for (const [label, words] of [['Short name', 'northmere-2026'], ['Title', 'Northmere own limits'], ['Source', 'Measured in our own rooms, invented'], ['Population', '120 invented people'], ['Technique', 'surface electrodes'], ['What is new in this version', 'First version']] as const) await page.getByRole('textbox', { name: label }).first().fill(words)
  await page.getByLabel('File').setInputFiles(file('wrong.csv', table([line({ unit: 's' }), line({ technique: 'median' }), line({ value: 'four' })])))
  await button(page, 'Check the file').click()
  const remarks = page.locator('[data-test=remark]')
  await expect.poll(() => remarks.count(), { timeout: 20_000 }).toBeGreaterThanOrEqual(3)
  const text = await remarks.allTextContents()
  for (const words of ['The unit of latency is ms', 'no technique of the catalogue', '"four" is no number']) expect(text.some(each => each.includes(words))).toBe(true)
  expect(await button(page, /^Store as version/).count()).toBe(0)
  await expectNoAxeFindings(page)
})

it('corrected it is stored, proposed by one and approved by another', async () => {
  const { page } = administrator
  await page.getByLabel('File').setInputFiles(file('right.csv', table([line({}), line({ technique: 'ulnar-motor-adm', value: '3.8' })])))
  await button(page, 'Check the file').click()
  await button(page, 'Store as version 1').click()
  await page.waitForURL(/\/shelf\/northmere-2026/)
  await page.getByLabel('Propose for site').selectOption({ label: 'Harrowmere Clinic' })
  await page.getByLabel('Only for some nerves').check()
  await expectNoAxeFindings(page)
  await page.getByLabel('median motor').check()
  await button(page, 'Propose set').click()
  await page.getByText('waits for approval by a medical director').waitFor()
  await page.getByText('one technique').waitFor()
  await expectNoAxeFindings(page)

  await signIn(app, director.page, app.person('medical-director'))
  await visit(director.page, `${app.origin}/shelf/northmere-2026?version=1`)
  await button(director.page, 'Approve for Harrowmere Clinic').click()
  await button(director.page, 'Approve set').click()
  await director.page.locator('[data-test=adoption]', { hasText: 'in use' }).waitFor()
})

it('says what would change for the latest studies, and compares with another set', async () => {
  const { page } = director
  await page.getByLabel('At site').selectOption({ label: 'Harrowmere Clinic' })
  await button(page, 'Judge them again').click()
  await page.getByText(/studies judged again/).waitFor({ timeout: 30_000 })
  await page.locator('[name=compare-with]').selectOption({ index: 1 })
  await page.getByText(/limits? differ|limit differs/).waitFor()
  await expectNoAxeFindings(page)
})

it('a policy needs two people as well', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/shelf/policies/clocks`)
  await button(page, 'Propose a change').click()
  await page.locator('[name="body.sign.urgent"]').fill('12')
  await page.getByLabel('What changes and why').fill('Urgent studies sooner')
  await button(page, 'Propose policy').click()
  await page.locator('[data-test=policy-version]', { hasText: 'waits for approval' }).waitFor()
  expect(await button(page, 'Approve version 1').count()).toBe(0)
  await visit(director.page, `${app.origin}/shelf/policies/clocks`)
  await button(director.page, 'Approve version 1').click()
  await button(director.page, 'Approve policy').click()
  await director.page.locator('[data-test=policy-version]', { hasText: 'in force' }).waitFor()
  await expectNoAxeFindings(director.page)
})

it('referrals come from a file, all or none; a namesake is told apart', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/intake/import`)
  await page.getByLabel('For site').selectOption({ label: 'Harrowmere Clinic' })
  await page.getByLabel('File (CSV)').setInputFiles(file('referrals.csv', 'Nachname;Given name;Birth date;Clinical question;Side\nQuibell;Nora;1971-05-06;Median nerve?;right\nQuibell;Nora;1971-06-05;Ulnar nerve?;left'))
  await page.locator('[data-test=import-line]').first().waitFor()
  expect(await page.locator('[data-test=import-line]').first().textContent()).toContain('It is missing')
  await page.getByLabel('Family name', { exact: true }).selectOption('nachname')
  await button(page, 'Check the lines').click()
  await expectNoAxeFindings(page)
  await button(page, 'Import 2 referrals').click()
  await page.waitForURL(/\/intake\?state=received/)
})

it('two records are put together and taken apart again', async () => {
  const { page } = administrator
  const ids = await page.evaluate(async () => ((await (await fetch('/api/patients?search=Quibell')).json()) as { rows: { id: string, birthDate: string, recordNumber: string, revision: number }[] }).rows)
  expect(ids).toHaveLength(2)
  await visit(page, `${app.origin}/patients/${ids[0]!.id}`)
  const other = page.locator('[data-test=same-person]').first()
  expect(await other.textContent()).toContain('day and month of birth swapped')
  const join = async () => {
    await page.getByRole('button', { name: /^Put together/ }).first().click()
    await page.getByLabel('How you know that it is one person').fill('She showed her card: the days were swapped.')
    await page.getByRole('dialog').getByRole('button', { name: 'Put together' }).click()
  }
  await join()
  await page.getByText('The dates of birth differ').waitFor()
  await page.keyboard.press('Escape')
  // The wrong date is corrected first, in the other record.
  await page.evaluate(async ({ id, revision, birthDate }) => {
    await fetch(`/api/patients/${id}`, { method: 'PATCH', headers: { 'content-type': 'application/json' }, body: JSON.stringify({ revision, birthDate }) })
  }, { id: ids[1]!.id, revision: ids[1]!.revision, birthDate: ids[0]!.birthDate })
  await visit(page, `${app.origin}/patients/${ids[0]!.id}`)
  await join()
  await page.locator('[data-test=merge]').waitFor()
  expect(await page.getByText('Median nerve?').count() + await page.getByText('Ulnar nerve?').count()).toBe(2)
  await expectNoAxeFindings(page)
  await page.getByRole('button', { name: /^Take apart/ }).click()
  await page.getByLabel('Why they are two persons').fill('Two cousins after all.')
  await page.getByRole('dialog').getByRole('button', { name: 'Take apart' }).click()
  await page.locator('[data-test=merge]').waitFor({ state: 'detached' })
  expect(await page.getByText('Median nerve?').count() + await page.getByText('Ulnar nerve?').count()).toBe(1)
})

it('a study from elsewhere is entered with its values', async () => {
  const { page } = administrator
  await button(page, 'Enter one').click()
  await page.getByLabel('Day of the study', { exact: true }).fill('2025-03-04')
  await page.getByLabel('Where', { exact: true }).fill('Another laboratory')
  await page.getByLabel('What it said').fill('Slowing of the median nerve at the wrist.')
  await button(page, 'Save study').click()
  await page.locator('[data-test=outside-study]', { hasText: 'Another laboratory' }).waitFor()
  await expectNoAxeFindings(page)
})

it('the overview counts, and a figure opens its cases', async () => {
  const { page } = director
  await visit(page, `${app.origin}/overview`)
  await expectNoAxeFindings(page)
  const month = await page.locator('[name=month] option').nth(0).getAttribute('value')
  await page.locator('[name=month]').selectOption(month)
  await page.getByRole('link', { name: /, Returned for information, Harrowmere Clinic$/ }).click()
  await page.waitForURL(/\/overview\/returned/)
  await page.getByRole('heading', { name: 'Returned for information' }).waitFor()
  await expectNoAxeFindings(page)
  expect(administrator.problems.filter(problem => !problem.includes('422'))).toEqual([])
  expect(director.problems).toEqual([])
})
