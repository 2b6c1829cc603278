import type { APIRequestContext, Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import type { ReportView } from '#shared/schemas/report'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { draftedStudy } from './drafted-study'

/**
 * Two practices have a Dr Martin Ashdown, and the report goes to the wrong one; its impression names the wrong side, too.
 * Withdrawn with its incident, sent to the right one, corrected: everyone who had version 1 gets version 2, and version 1
 * stays as it was and opens as superseded.
 */
let app: App
let administrator: Window
let neurologist: Window
let studyId = ''
let reportPath = ''
let made: Awaited<ReturnType<typeof draftedStudy>>
let first: ReportView
const wrongBox = 'martin.ashdown@mill-street-practice.example'
const rightBox = 'martin.ashdown@chapel-row-medical-centre.example'
const copyBox = 'orla.whitcombe@wharf-lane-surgery.example'

beforeAll(async () => {
  app = await startApp()
  made = await draftedStudy(app, { practice: 'Mill Street Practice', physician: 'Dr Martin Ashdown', copyTo: 'Dr Orla Whitcombe' })
  studyId = made.studyId
  administrator = await app.open()
  neurologist = await app.open()
  await signIn(app, administrator.page, app.person('administrator'))
  await signIn(app, neurologist.page, app.person('neurologist'))
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const button = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: typeof name === 'string' })
const other = (side: string) => side === 'right' ? 'left' : 'right'
const swapped = (words: string, side: string) => words.replace(new RegExp(side, 'gi'), found => found === found.toUpperCase() ? other(side).toUpperCase() : found[0] === found[0]!.toUpperCase() ? `${other(side)[0]!.toUpperCase()}${other(side).slice(1)}` : other(side))
const reportNow = async (version?: number) => await (await neurologist.context.request.get(`${app.origin}/api${reportPath}${version ? `?version=${version}` : ''}`)).json() as ReportView

/** The mails of this report at an address, waited for until there are so many. */
async function mailsTo(address: string, count: number) {
  for (let tries = 0; tries < 100; tries++) {
    const found = app.mail.mails.filter(mail => mail.to.includes(address) && mail.mail.subject?.includes(first.number))
    if (found.length >= count) return found
    await new Promise(done => setTimeout(done, 500))
  }
  throw new Error(`No ${count} mails for ${address} within 50 seconds.`)
}
/** The practice wants links from now on, and names somebody who may collect for it. */
async function collects(request: APIRequestContext): Promise<void> {
  const { rows } = await (await request.get(`${app.origin}/api/directory/practices?search=Chapel`)).json() as { rows: { id: string }[] }
  const path = `${app.origin}/api/directory/practices/${rows[0]!.id}`
  expect((await request.patch(path, { data: { deliveryMethod: 'collection-link' } })).ok()).toBe(true)
  expect((await request.post(`${path}/delegates`, { data: { name: 'Nell Fennimore', duty: 'practice secretary', phone: '' } })).ok()).toBe(true)
}
const linkOf = (text: string | undefined) => /http:\/\/\S+\/acknowledge\/\S+/.exec(text ?? '')![0]
const rowOf = (page: Page, practice: string) => page.getByRole('row').filter({ hasText: first.number }).filter({ hasText: practice })
async function sendHeld(page: Page): Promise<void> {
  await visit(page, `${app.origin}/dispatch?state=held`)
  const mine = page.getByRole('row').filter({ hasText: first.number })
  for (let left = await mine.count(); left > 0; left--) {
    await mine.first().getByRole('button', { name: /^Send now/ }).click()
    await mine.nth(left - 1).waitFor({ state: 'detached' })
  }
}

it('is signed with the wrong side, against the question of the program, and goes to the practice that the referral names', async () => {
  const { page, context } = neurologist
  const side = made.line.side!
  const impression = made.draft.impression.map(line => line.id === made.line.id ? { ...line, side: other(side), words: swapped(line.words, side) } : line)
  const put = async (draft: object, revision: number) => await (await context.request.put(`${app.origin}/api/studies/${studyId}/draft`, { data: { draft, revision } })).json() as { revision: number, view: { checks: { key: string, strength: string, about?: string, resolvedBecause?: string }[] } }
  const reading = await (await context.request.get(`${app.origin}/api/studies/${studyId}/reading`)).json() as { draftRevision: number }
  const saved = await put({ ...made.draft, impression }, reading.draftRevision)
  const open = saved.view.checks.filter(check => check.strength !== 'ok' && !check.resolvedBecause)
  expect(open.some(check => check.key.includes('side'))).toBe(true)
  await put({ ...made.draft, impression, resolved: [...made.draft.resolved ?? [], ...open.map(check => ({ key: check.key, reason: 'Read from the trace.', about: check.about }))] }, saved.revision)
  await visit(page, `${app.origin}/reading/${studyId}`)
  await page.getByLabel(/I reviewed the data/).check()
  await page.getByLabel('Your password, again').fill(app.person('neurologist').password)
  await button(page, 'Sign report').click()
  await page.getByRole('link', { name: 'Open the report' }).click()
  await page.waitForURL(/\/reports\//)
  reportPath = new URL(page.url()).pathname
  first = await reportNow()
  await sendHeld(administrator.page)
  expect([(await mailsTo(wrongBox, 1)).length, (await mailsTo(copyBox, 1)).length]).toEqual([1, 1])
})

it('is withdrawn with a record whose factors are filled in and whose clocks run', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/dispatch?state=sent`)
  await rowOf(page, 'Mill Street Practice').getByRole('button', { name: /^Withdraw/ }).click()
  const dialog = page.getByRole('dialog')
  await dialog.getByText('Mill Street Practice, Tarnfield').waitFor()
  await dialog.getByLabel('Reason').fill('Meant for the Dr Ashdown in Osterleigh')
  await dialog.getByRole('button', { name: 'Withdraw delivery' }).click()
  await page.waitForURL(/\/dispatch\/incidents\/[0-9a-f-]{36}$/)
  await page.waitForLoadState('networkidle')
  await page.getByText('72 hours').waitFor()
  await page.getByText('60 days').first().waitFor()
  expect(await page.getByLabel('1. What the report held').inputValue()).toContain('AES-256')
  expect(await page.getByLabel('2. Who got it').inputValue()).toContain(wrongBox)
  await expectNoAxeFindings(page)
  // The link of the mail at the wrong practice is closed and says what to do.
  const stranger = await app.open({ width: 390 })
  await visit(stranger.page, linkOf((await mailsTo(wrongBox, 1))[0]!.mail.text))
  await stranger.page.getByText('This report was withdrawn').waitFor()
  expect(await stranger.page.getByRole('button', { name: 'Acknowledge receipt' }).count()).toBe(0)
  await expectNoAxeFindings(stranger.page)
})

it('goes to the right one of the two, shown with practice and town', async () => {
  const { page, context } = administrator
  await collects(context.request)
  const panel = page.getByRole('region', { name: 'The right recipient' })
  await panel.getByLabel('Recipient').fill('Ashdown')
  const offered = panel.getByRole('button', { name: /Dr Martin Ashdown/ })
  await offered.first().waitFor()
  expect(await offered.count()).toBe(1)
  expect(await offered.innerText()).toMatch(/Chapel Row Medical Centre, Osterleigh.*another physician has this name/s)
  await offered.click()
  await panel.getByLabel('Reason').fill('The right one of the two')
  await button(page, 'Send the report').click()
  await panel.getByText(/Sent to Dr Martin Ashdown/).waitFor()
  await sendHeld(page)
  expect(await mailsTo(rightBox, 1)).toHaveLength(1)
})

it('the record is closed under a name when it is complete', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/dispatch/incidents`)
  await expectNoAxeFindings(page)
  await page.getByRole('link', { name: new RegExp(first.number) }).click()
  await page.getByLabel('Who was spoken to').waitFor()
  await page.waitForLoadState('networkidle')
  await button(page, 'Close the incident').click()
  await page.locator('[data-test=error-summary]').getByText('Say who was spoken to').waitFor()
  await page.getByLabel('Who was spoken to').fill('The practice manager')
  await page.getByLabel('When', { exact: true }).fill(await page.getByLabel('When it was noticed').inputValue())
  await page.getByLabel('by telephone').check()
  await page.getByLabel('What was said').fill('They delete it unopened and confirm by letter.')
  await page.getByLabel('nobody has to be told').check()
  await page.getByLabel('Reasons').fill('Deleted unopened.')
  await button(page, 'Close the incident').click()
  await page.getByRole('dialog').getByRole('button', { name: 'Close incident' }).click()
  await page.locator('[data-test=closed]').getByText(app.person('administrator').name).waitFor()
  await expectNoAxeFindings(page)
})

it('the side is corrected as version 2, which reaches all who had version 1 and not the wrong practice', async () => {
  const { page } = neurologist
  const side = made.line.side!
  await visit(page, `${app.origin}${reportPath}`)
  await button(page, 'Make a new version').click()
  await page.getByLabel(/Corrected: a wrong side/).check()
  await page.getByLabel('What changed and why').fill('The impression named the wrong side.')
  const line = page.locator('[data-test=impression-line]').first()
  await line.getByLabel(/in your words/).fill(made.line.words)
  await line.getByLabel(side.toUpperCase(), { exact: true }).check()
  await page.getByLabel(/I reviewed the data/).check()
  await page.getByLabel('Your password, again').fill(app.person('neurologist').password)
  await button(page, /^Sign (?!out)/).click()
  await page.waitForURL(/version=2/)
  await sendHeld(administrator.page)
  for (const box of [rightBox, copyBox]) expect((await mailsTo(box, 2)).at(-1)!.mail.subject).toMatch(/was corrected.*version 2/)
  expect(await mailsTo(wrongBox, 1)).toHaveLength(1)
})

it('version 1 is as it was and opens as superseded, on screen and by its link', async () => {
  const { page } = neurologist
  const [old, latest] = [await reportNow(1), await reportNow()]
  expect([old.sha256, old.superseded, latest.version]).toEqual([first.sha256, true, 2])
  expect(latest.snapshot.referral.physician).toMatchObject({ practiceName: 'Chapel Row Medical Centre', town: 'Osterleigh' })
  await visit(page, `${app.origin}${reportPath}?version=1`)
  await page.locator('[data-test=superseded]').getByText('Superseded').waitFor()
  const reader = await app.open({ width: 390, dark: true })
  await visit(reader.page, linkOf((await mailsTo(copyBox, 2))[0]!.mail.text))
  await reader.page.getByText('A newer version stands instead of this one').waitFor()
  await expectNoAxeFindings(reader.page)
})

it('the right practice collects it: with its passphrase, and whoever it is says so', async () => {
  const { page } = await app.open({ width: 390 })
  await visit(page, linkOf((await mailsTo(rightBox, 2)).at(-1)!.mail.text))
  const passphrase = page.getByLabel('Passphrase of your practice')
  await passphrase.fill('not these words')
  await passphrase.press('Enter')
  await page.getByText('This is not the passphrase of your practice').waitFor()
  await passphrase.fill(app.practices.find(practice => practice.name === 'Chapel Row Medical Centre')!.passphrase)
  await passphrase.press('Enter')
  const who = page.getByRole('group', { name: 'Who collects?' })
  await who.waitFor()
  expect(await who.getByRole('radio').count()).toBe(3)
  await expectNoAxeFindings(page)
  await button(page, 'Collect the report').press('Enter')
  await who.getByText('Choose who collects.').waitFor()
  await who.getByLabel('Nell Fennimore, practice secretary').check()
  const [file] = await Promise.all([page.waitForEvent('download'), button(page, 'Collect the report').press('Enter')])
  expect(file.suggestedFilename()).toBe(`${first.number}.pdf`)
  await page.locator('[data-test=collected]').waitFor()
  await visit(administrator.page, `${app.origin}/dispatch?state=sent`)
  await rowOf(administrator.page, 'Chapel Row Medical Centre').getByText('collected once, last by Nell Fennimore').waitFor()
})

it('a recipient who thinks that it is wrong says so without an account, and the reader answers on that version', async () => {
  const reader = await app.open({ width: 390 })
  const { page } = reader
  await visit(page, linkOf((await mailsTo(rightBox, 2)).at(-1)!.mail.text))
  await button(page, 'I think this is wrong').press('Enter')
  await page.getByLabel('What looks wrong').fill('The patient is left-handed; does the report know?')
  await button(page, 'Send to the neurologist').press('Enter')
  await page.locator('[data-test=replied]').waitFor()
  await expectNoAxeFindings(page)
  const doctor = neurologist.page
  await visit(doctor, `${app.origin}${reportPath}?version=2`)
  await doctor.locator('[data-test=reply]').getByText('left-handed').waitFor()
  await doctor.locator('[data-test=reply]').getByRole('button', { name: /^Answer/ }).click()
  await doctor.getByLabel('What was answered, and how').fill('Telephoned: yes, it does.')
  await button(doctor, 'Record the answer').click()
  await doctor.locator('[data-test=reply]').getByText('Telephoned: yes, it does.').waitFor()
  await expectNoAxeFindings(doctor)
})

it('a mail that comes back is told within seconds, gone after from the chase list and recorded as read out by telephone', async () => {
  const { page } = administrator
  app.mail.returnMail((await mailsTo(copyBox, 2)).at(-1)!)
  const row = rowOf(page, 'Wharf Lane Surgery')
  for (let tries = 0; tries < 30; tries++) {
    await visit(page, `${app.origin}/dispatch/chase`)
    if (await row.getByText('bounced').count()) break
    await page.waitForTimeout(500)
  }
  await row.getByText('550 5.1.1').waitFor()
  await row.getByRole('button', { name: /^Take/ }).click()
  await row.getByText(app.person('administrator').name).waitFor()
  await expectNoAxeFindings(page)
  await row.getByRole('button', { name: /^Resolve/ }).click()
  const dialog = page.getByRole('dialog')
  await dialog.getByLabel(/It went by letter, telephone/).check()
  await dialog.getByLabel('How you know').fill('Telephoned')
  await dialog.getByRole('button', { name: 'Record what became of it' }).click()
  await dialog.getByText('Say who got it.').first().waitFor()
  await dialog.getByLabel('Who got it').fill('Dr Whitcombe herself')
  await dialog.getByLabel('The result was read back').check()
  await dialog.getByRole('button', { name: 'Record what became of it' }).click()
  await dialog.waitFor({ state: 'hidden' })
  await visit(page, `${app.origin}/dispatch?state=by-hand`)
  await row.getByText(/by telephone to Dr Whitcombe herself, .*, read back/).waitFor()
})

it('nothing went to another address and no page complained', () => {
  for (const window of [administrator, neurologist]) {
    expect(window.outside).toEqual([])
    expect(window.problems.filter(text => !/status of (409|422)/.test(text))).toEqual([])
  }
})
