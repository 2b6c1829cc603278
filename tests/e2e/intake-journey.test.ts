import ICAL from 'ical.js'
import type { ParsedMail } from 'mailparser'
import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type Window } from './app'
import { expectFocus, focused, press } from './keyboard'

/**
 * A referral that is not complete: returned, completed by the referring practice through the mailed link, booked and
 * moved in the week by keyboard alone, not attended, booked again; what the patient gets by mail each time. Then several
 * referrals at once and a saved view.
 */
let app: App
let administrator: Window
let practice: Window
let referralId = ''
let number = ''
const patient = { familyName: 'Oddfellow', givenName: 'Élodie', birthDate: '1969-07-21', email: 'elodie@home.example' }

beforeAll(async () => {
  app = await startApp()
  administrator = await app.open()
  practice = await app.open({ width: 390 })
  await signIn(app, administrator.page, app.person('administrator'))
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

const button = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: typeof name === 'string' })

async function call<T>(path: string, body?: object, method = body ? 'POST' : 'GET'): Promise<T> {
  const answer = await administrator.context.request.fetch(`${app.origin}${path}`, { method, data: body, headers: { origin: app.origin } })
  if (!answer.ok()) throw new Error(`${path} answered ${answer.status()}: ${await answer.text()}`)
  return await answer.json() as T
}

/** Waits for the n-th mail to an address whose subject has these words. */
async function mailTo(address: string, count: number, words = ''): Promise<ParsedMail> {
  for (let tries = 0; tries < 200; tries++) {
    const theirs = app.mail.mails.filter(one => one.to.includes(address) && (one.mail.subject ?? '').includes(words))
    if (theirs.length >= count) return theirs[count - 1]!.mail
    await new Promise(done => setTimeout(done, 100))
  }
  throw new Error(`No mail number ${count} to ${address}.`)
}
function calendarOf(mail: ParsedMail) {
  const text = mail.attachments.find(one => one.contentType.startsWith('text/calendar'))!.content.toString('utf8')
  const calendar = new ICAL.Component(ICAL.parse(text) as never)
  const event = new ICAL.Event(calendar.getFirstSubcomponent('vevent')!)
  return { method: calendar.getFirstPropertyValue('method'), uid: event.uid, sequence: event.sequence, start: event.startDate.toJSDate().toISOString(), text }
}
const nothingOf = (words: string) => {
  for (const word of [patient.familyName, patient.givenName, 'lodie', '1969', 'tingling', 'Which finger']) expect(words).not.toContain(word)
}

/** Presses a key until the place under it is free, at least once. */
async function moveUntilFree(page: Page, key: string): Promise<string> {
  const preview = page.locator('[data-test=preview]')
  for (let times = 0; times < 40; times++) {
    const before = await preview.innerText()
    await press(page, key)
    await expect.poll(() => preview.innerText()).not.toBe(before)
    if ((await preview.innerText()).includes(': free.')) return await preview.innerText()
  }
  throw new Error('No place was free.')
}

it('an incomplete referral is returned with one press: what is missing is ticked already', async () => {
  const { page } = administrator
  const me = await call<{ sites: { id: string, name: string }[] }>('/api/me')
  const siteId = me.sites.find(site => site.name.startsWith('Harrowmere'))!.id
  const physician = (await call<{ rows: { id: string, name: string }[] }>('/api/directory/physicians?search=Whitcombe')).rows[0]!
  const made = await call<{ id: string }>('/api/patients', { ...patient, sexForLimits: 'female', mailConsent: 'yes' })
  const referral = await call<{ id: string, number: string }>('/api/referrals', { patientId: made.id, siteId, physicianId: physician.id, clinicalQuestion: 'Median nerve at the wrist?', symptoms: 'tingling at night', side: null, cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no' } })
  referralId = referral.id
  number = referral.number
  await call(`/api/referrals/${referralId}/receive`, {})
  await visit(page, `${app.origin}/intake/${referralId}`)
  await button(page, 'Return for information').click()
  const form = page.locator('[data-test=return-form]')
  expect(await form.getByRole('checkbox', { checked: true }).count()).toBe(2)
  await form.getByLabel('Another question').check()
  await form.getByLabel('In your words').fill('Which finger is worst?')
  await expectNoAxeFindings(page)
  await form.getByRole('button', { name: 'Return for information' }).click()
  await page.getByText('Asked for information').waitFor()
  await expectNoAxeFindings(page)
})

it('the practice completes it on a telephone through the link, with the date of birth, and it comes back by itself', async () => {
  const { page } = practice
  const address = (await call<{ rows: { email: string }[] }>('/api/directory/physicians?search=Whitcombe')).rows[0]!.email
  const mail = await mailTo(address, 1, number)
  nothingOf(`${mail.subject} ${mail.text} ${String(mail.html)}`)
  const link = /https?:\S+\/complete\/\S+/.exec(mail.text ?? '')![0]
  await visit(page, link)
  await page.getByText('É. O.').waitFor()
  nothingOf(await page.locator('body').innerText())
  await expectNoAxeFindings(page)
  await page.getByRole('textbox', { name: 'Date of birth of the patient' }).fill('20 July 1969')
  await button(page, 'Go on').click()
  await page.getByText('This is not the date of birth').first().waitFor()
  await page.getByRole('textbox', { name: 'Date of birth of the patient' }).fill('21 July 1969')
  await button(page, 'Go on').click()
  await page.getByText('Which finger is worst?').waitFor()
  expect(await page.getByLabel('Clinical question').count()).toBe(0)
  await expectNoAxeFindings(page)
  await button(page, 'Send back').click()
  await page.getByText('Choose the side.').first().waitFor()
  await page.getByLabel('RIGHT', { exact: true }).check()
  await page.getByLabel('Examination').fill('Reduced touch on the thumb.')
  await page.getByLabel('Your answer').fill('The middle finger.')
  await page.locator('input[type=file]').setInputFiles({ name: 'letter.pdf', mimeType: 'application/pdf', buffer: Buffer.from('%PDF-1.4\n1 0 obj<</Type/Page>>endobj\n%%EOF') })
  await page.getByText('stored: letter.pdf').waitFor()
  await button(page, 'Send back').click()
  await page.locator('[data-test=letter-done]').waitFor()
  await visit(page, link)
  await page.locator('[data-test=letter-closed]').waitFor()
  expect(practice.outside).toEqual([])
})

it('what came back is marked in the list and on the referral, until it is noted', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/intake?cameBack=1`)
  await page.getByRole('link', { name: /Look at what came back/ }).click()
  const back = page.locator('[data-test=came-back]')
  await back.getByText('Reduced touch on the thumb.').waitFor()
  await back.getByText('The middle finger.').waitFor()
  await back.getByText('1 file').waitFor()
  await expectNoAxeFindings(page)
  await button(page, 'Noted').click()
  await button(page, 'Noted').waitFor({ state: 'detached' })
  await page.getByLabel('Protocol').selectOption({ label: 'Carpal tunnel' })
  await button(page, 'Accept referral').click()
  await page.getByRole('link', { name: 'Find the first free time in the week' }).waitFor()
})

it('is booked in the week by keyboard: the first free time, moved by arrow keys, said aloud', async () => {
  const { page } = administrator
  await page.getByRole('link', { name: 'Find the first free time in the week' }).focus()
  await press(page, 'Enter')
  await page.waitForURL(/\/intake\/week/)
  const preview = page.locator('[data-test=preview]')
  await preview.waitFor()
  await expectFocus(page, /Oddfellow, Élodie/)
  expect(await preview.innerText()).toContain(': free.')
  await moveUntilFree(page, 'ArrowDown')
  await expectFocus(page, /Arrow keys move it/)
  await expectNoAxeFindings(page)
  await press(page, 'Enter')
  await page.locator('[data-test=said]').getByText('The patient gets a mail with a calendar file.').waitFor()
  await expect.poll(async () => (await focused(page)).name).toMatch(/Oddfellow, Élodie/)
})

it('the patient gets a mail with date, place, how to prepare and a calendar entry, and nothing of themselves', async () => {
  const mail = await mailTo(patient.email, 1)
  expect(mail.subject).toBe('Your appointment')
  expect(mail.text).toContain('warm hands and feet')
  nothingOf(`${mail.subject} ${mail.text} ${calendarOf(mail).text}`)
  expect(calendarOf(mail)).toMatchObject({ method: 'REQUEST', sequence: 0 })
})

it('is moved by keyboard; a taken place is refused before and by the server; the reason is asked; the calendar entry moves', async () => {
  const { page } = administrator
  const preview = page.locator('[data-test=preview]')
  await press(page, 'Enter')
  await preview.waitFor()
  await moveUntilFree(page, 'ArrowDown')
  await press(page, 'Enter')
  await page.getByLabel('Reason of the move').selectOption('the patient asked')
  await button(page, 'Move booking').focus()
  await press(page, 'Enter')
  await page.locator('[data-test=said]').getByText(/moved to/).waitFor()
  const [first, second] = [calendarOf(await mailTo(patient.email, 1)), calendarOf(await mailTo(patient.email, 2))]
  expect(second).toMatchObject({ method: 'REQUEST', sequence: 1, uid: first.uid })
  expect(Date.parse(second.start) - Date.parse(first.start)).toBeGreaterThanOrEqual(15 * 60_000)
  nothingOf(second.text)
  const view = await call<{ patientId: string, siteId: string, physicianId: string, booking: { room: string, startsAt: string } }>(`/api/referrals/${referralId}`)
  expect(new Date(view.booking.startsAt).toISOString()).toBe(second.start)
  const other = await call<{ id: string }>('/api/referrals', { patientId: view.patientId, siteId: view.siteId, physicianId: view.physicianId, clinicalQuestion: 'The same again?', side: 'left', symptoms: 'numb', examination: 'not examined', cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no' } })
  await call(`/api/referrals/${other.id}/receive`, {})
  await call(`/api/referrals/${other.id}/accept`, { protocol: 'carpal-tunnel' })
  const [date, time] = new Intl.DateTimeFormat('sv-SE', { timeZone: 'Europe/Prague', dateStyle: 'short', timeStyle: 'short' }).format(new Date(view.booking.startsAt)).split(' ')
  await expect(call(`/api/referrals/${other.id}/book`, { siteId: view.siteId, room: view.booking.room, date, time, minutes: 30 })).rejects.toThrow('double-booking')
  await call(`/api/referrals/${other.id}/cancel`, { reason: 'entered for a test' })
})

it('is put elsewhere by pointer, and nothing is stored before it is confirmed', async () => {
  const { page } = administrator
  const { booking: { room } } = await call<{ booking: { room: string } }>(`/api/referrals/${referralId}`)
  const elsewhere = room === 'Room 1' ? 'Room 2' : 'Room 1'
  await page.locator(`[data-booking="${number}"]`).click()
  await page.locator(`[data-lane$="${elsewhere}"]`).last().click({ position: { x: 20, y: 200 } })
  const preview = page.locator('[data-test=preview]')
  await expect.poll(() => preview.innerText()).toContain(elsewhere)
  await page.locator('[data-test=placing]').getByRole('button', { name: 'Go back' }).click()
  await preview.waitFor({ state: 'detached' })
  // The same by dragging it there.
  const lane = page.locator(`[data-lane$="${elsewhere}"]`).last()
  await page.locator(`[data-booking="${number}"]`).hover()
  await page.mouse.down()
  await lane.hover({ position: { x: 20, y: 200 } })
  await preview.waitFor()
  await lane.hover({ position: { x: 20, y: 240 } })
  await page.mouse.up()
  await expect.poll(() => preview.innerText()).toContain(elsewhere)
  await page.locator('[data-test=placing]').getByRole('button', { name: 'Go back' }).click()
  await preview.waitFor({ state: 'detached' })
  const view = await call<{ booking: { room: string } }>(`/api/referrals/${referralId}`)
  expect(view.booking.room).toBe(room)
})

it('did not attend, with the reason; booked again from those who wait; cancelled, and the entry is called off', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/intake/${referralId}`)
  await button(page, 'Did not attend').click()
  await page.getByRole('dialog').getByLabel('Reason').fill('Did not come.')
  await page.getByRole('dialog').getByRole('button', { name: 'Did not attend' }).click()
  await page.getByRole('heading', { name: /Next: book again or cancel/ }).waitFor()
  const { siteId } = await call<{ siteId: string }>(`/api/referrals/${referralId}`)
  await visit(page, `${app.origin}/intake/week?site=${siteId}`)
  await button(page, `Find a time for ${patient.familyName}, ${patient.givenName}`).click()
  await page.locator('[data-test=preview]').waitFor()
  await button(page, 'Book').click()
  await page.locator('[data-test=said]').getByText(/booked for/).waitFor()
  // Its time lay ahead, so it was called off when it was marked; the new one goes on counting.
  expect(calendarOf(await mailTo(patient.email, 3))).toMatchObject({ method: 'CANCEL', sequence: 2 })
  const again = calendarOf(await mailTo(patient.email, 4))
  expect(again).toMatchObject({ method: 'REQUEST', sequence: 3 })
  await visit(page, `${app.origin}/intake/${referralId}`)
  await button(page, 'Cancel').click()
  await page.getByRole('dialog').getByLabel('Reason').fill('No longer wanted.')
  await page.getByRole('dialog').getByRole('button', { name: 'Cancel referral' }).click()
  expect(calendarOf(await mailTo(patient.email, 5))).toMatchObject({ method: 'CANCEL', sequence: 4, uid: again.uid })
})

it('several at once: a preview says what happens to whom, each is done by itself', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/intake?state=received`)
  const boxes = page.getByRole('checkbox', { name: /^Choose [A-ZŠ]/ })
  const chosen = await boxes.count()
  expect(chosen).toBeGreaterThan(0)
  await page.getByRole('checkbox', { name: 'Choose every row of this page' }).check()
  const bulk = page.locator('[data-test=bulk]')
  await bulk.getByLabel('give to somebody').check()
  await bulk.getByLabel('Looked after by').selectOption({ label: 'Tobias Wenlock' })
  await bulk.getByRole('button', { name: 'See what will happen' }).click()
  await bulk.getByRole('heading', { name: /Will be done for/ }).waitFor()
  await expectNoAxeFindings(page)
  const able = Number(/Will be done for (\d+)/.exec(await bulk.getByRole('heading', { name: /Will be done for/ }).innerText())![1])
  if (able) {
    await bulk.getByRole('button', { name: `Reassign ${able}` }).click()
    await bulk.getByRole('heading', { name: new RegExp(`Done for ${able} of`) }).waitFor()
  }
  await bulk.getByText(/Not done|Given to the new person/).first().waitFor()
})

it('a view is saved under a name, found again, and shown to another person by its address', async () => {
  const { page } = administrator
  await visit(page, `${app.origin}/intake?overdue=1&sort=urgency&direction=desc`)
  await button(page, 'Save this view').click()
  await page.getByLabel('Name of the view').fill('Late and urgent')
  await button(page, 'Save view').click()
  await page.getByRole('link', { name: 'Late and urgent' }).waitFor()
  await visit(page, `${app.origin}/intake`)
  await page.getByRole('link', { name: 'Late and urgent' }).click()
  await page.waitForURL(/overdue=1/)
  await page.getByRole('button', { name: /^overdue/, pressed: true }).waitFor()
  await expectNoAxeFindings(page)
  expect([...administrator.problems, ...practice.problems].filter(problem => !/422|410/.test(problem))).toEqual([])
})
