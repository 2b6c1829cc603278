import { randomUUID } from 'node:crypto'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import Sqlite from 'better-sqlite3'
import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { expectNoAxeFindings, signIn, startApp, visit, type App, type DemoPerson, type Window } from './app'
import { expectFocus } from './keyboard'

/**
 * An urgent study over a weekend: handed over on Friday to a reader who is away, found by the clocks and by the reader who
 * covers, opened in an emergency by a neurologist of another site, and signed. The server's clock is the real one; what
 * lies in the past is aged in the data (the state of a study, the end of an emergency), never in the chains.
 */
let app: App
let cover: Window
let outsider: Window
let director: Window
let study: { id: string, number: string, familyName: string }
let other: { id: string }
const HOUR = 3_600_000
const ago = (hours: number) => new Date(Date.now() - hours * HOUR).toISOString()
/** Everybody of the demonstration, not only the first of each role. */
function named(name: string): DemoPerson {
  const { people, others } = JSON.parse(readFileSync(join(app.dataDir, 'demo-sign-ins.json'), 'utf8')) as Record<'people' | 'others', DemoPerson[]>
  return [...people, ...others].find(person => person.name.includes(name))!
}
const button = (page: Page, name: string | RegExp) => page.getByRole('button', { name, exact: typeof name === 'string' })
const reason = 'The patient is getting weaker and nobody of this site can be reached'

/** A hand on the data beside the running server, as time would have left them. */
function aged<T>(act: (database: Sqlite.Database) => T): T {
  const database = new Sqlite(join(app.dataDir, 'orthodrome.sqlite'))
  database.pragma('busy_timeout = 10000')
  try {
    return act(database)
  }
  finally {
    database.close()
  }
}

beforeAll(async () => {
  app = await startApp()
  study = aged((database) => {
    const site = database.prepare(`SELECT id FROM site WHERE name = 'Harrowmere Clinic'`).pluck().get() as string
    const find = database.prepare(`SELECT study.id, study.number, family_name AS familyName, study.referral_id AS referralId FROM study JOIN patient ON patient.id = study.patient_id
      WHERE study.state = 'handed-over' AND NOT EXISTS (SELECT 1 FROM report WHERE report.study_id = study.id) ORDER BY study.number`)
    const found = find.get() as typeof study & { referralId: string }
    // Of the first site, where the third neurologist holds no role.
    database.prepare('UPDATE study SET site_id = ? WHERE id = ?').run(site, found.id)
    database.prepare('UPDATE referral SET site_id = ? WHERE id = ?').run(site, found.referralId)
    other = { id: database.prepare('SELECT id FROM study WHERE site_id = ? AND id <> ?').pluck().get(site, found.id) as string }
    const reader = database.prepare(`SELECT id FROM user WHERE name = 'Dr Casimir Thorne'`).pluck().get() as string
    const covering = database.prepare(`SELECT id FROM user WHERE name = 'Dr Eluned Varga'`).pluck().get() as string
    database.prepare('UPDATE study SET reader_id = ?, taken_at = ?, state_since = ?, handed_over_at = ? WHERE id = ?').run(reader, ago(63), ago(63), ago(63), found.id)
    database.prepare(`UPDATE referral SET urgency = 'urgent', urgency_reason = 'Weakness grows by the day' WHERE id = ?`).run(found.referralId)
    database.prepare('INSERT INTO absence (id, user_id, from_day, to_day, covered_by, created_at, created_by) VALUES (?, ?, ?, ?, ?, ?, ?)').run(randomUUID(), reader, ago(72).slice(0, 10), ago(-72).slice(0, 10), covering, ago(96), reader)
    return found
  })
  cover = await app.open({ width: 390, height: 844 })
  outsider = await app.open()
  director = await app.open()
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

it('the queue says how long it waits, and shows it to the reader who covers', async () => {
  const { page } = cover
  await signIn(app, page, named('Varga'))
  await visit(page, `${app.origin}/reading?assigned=mine`)
  const row = page.getByRole('row').filter({ hasText: study.number })
  const text = (await row.innerText()).replace(/\s+/g, ' ')
  expect(text).toContain('waiting 2 days')
  expect(text).toMatch(/away until .*, covered by you/)
  expect(await row.getByRole('button', { name: /^Take over/ }).count()).toBe(1)
  expect(await page.locator('[data-test=late]').innerText()).toMatch(/for more than 48 h/)
  await expectNoAxeFindings(page)
})

it('a neurologist of another site finds nothing in their queue, and the study is shut', async () => {
  const { page } = outsider
  await signIn(app, page, named('Albright'))
  await visit(page, `${app.origin}/reading`)
  expect(await page.getByRole('row').filter({ hasText: study.number }).count()).toBe(0)
  await page.goto(`${app.origin}/reading/${study.id}`)
  expect(await page.locator('body').innerText()).toContain('you hold no role at its site')
})

it('in an emergency it opens for a stated reason, and only it', async () => {
  const { page } = outsider
  await visit(page, `${app.origin}/reading`)
  await page.getByRole('link', { name: 'A study of another site, in an emergency' }).click()
  await page.getByLabel('Number of the study or referral').fill(study.familyName)
  await button(page, 'Find').click()
  await page.getByText(/found at other sites/).waitFor()
  await expectNoAxeFindings(page)
  await button(page, 'Open for four hours').click()
  await page.getByText('Choose the study.').first().waitFor()
  await page.getByText('Say in a sentence why you need this record now.').first().waitFor()
  await page.getByRole('radio').and(page.getByLabel(new RegExp(study.number))).check()
  await page.getByLabel('Why you need this record now').fill(reason)
  await button(page, 'Open for four hours').click()
  await page.waitForURL(`${app.origin}/reading/${study.id}`)
  expect((await page.locator('[data-test=emergency]').innerText())).toContain(reason)
  await page.getByRole('heading', { name: 'Findings' }).waitFor()
  await expectNoAxeFindings(page)
  const answer = await outsider.context.request.get(`${app.origin}/api/studies/${other.id}`)
  expect(answer.status()).toBe(404)
})

it('after four hours it is shut again', async () => {
  const { page } = outsider
  aged(database => database.prepare('UPDATE emergency_access SET opened_at = ?, expires_at = ? WHERE study_id = ?').run(ago(4.1), ago(0.1), study.id))
  await page.goto(`${app.origin}/reading/${study.id}`)
  expect(await page.locator('body').innerText()).toContain('you hold no role at its site')
})

it('the medical director reviews the reason and each look', async () => {
  const { page } = director
  await signIn(app, page, named('Solano'))
  await visit(page, `${app.origin}/dispatch`)
  const task = page.locator('[data-test=task]').filter({ hasText: study.number })
  expect(await task.innerText()).toContain('opened in an emergency by Dr Noor Albright')
  await task.getByRole('link', { name: /^Open/ }).click()
  await page.getByText(reason).first().waitFor()
  await expectNoAxeFindings(page)
  const views = aged(database => database.prepare('SELECT because FROM view_event WHERE subject_id = ? AND because <> \'\'').pluck().all(study.id)) as string[]
  expect(views.length).toBeGreaterThan(1)
  expect(new Set(views)).toEqual(new Set([reason]))
})

it('a colleague in training takes it over and drafts, and is not asked for a signature', async () => {
  const { page } = await app.open()
  await signIn(app, page, named('Pike'))
  await visit(page, `${app.origin}/reading/${study.id}`)
  await button(page, /^Take over from Dr Casimir Thorne/).click()
  await page.locator('[data-test=in-training]').waitFor()
  await page.getByRole('textbox', { name: 'Recommendation' }).fill('Clinical review today.')
  await saved(page)
  expect(await page.getByLabel('Your password, again').count()).toBe(0)
  await expectNoAxeFindings(page)
  await page.context().close()
})

it('the covering reader takes it over, writes and signs on a narrow screen, and the next study has the focus', async () => {
  const { page } = cover
  await visit(page, `${app.origin}/reading/${study.id}`)
  await button(page, /^Take over from Dr Amadeus Pike/).click()
  await page.getByLabel(/in your words/).first().fill('The findings do not explain the weakness. Clinical review today.')
  await page.getByRole('textbox', { name: 'Clinical correlation' }).fill('Told apart from the question of the referral.')
  await page.getByLabel('none identified').check()
  await saved(page)
  await answerChecks(page)
  await expectNoAxeFindings(page)
  expect(await page.evaluate(() => document.documentElement.scrollWidth <= innerWidth)).toBe(true)
  await page.getByLabel(/I reviewed the data/).check()
  await page.getByLabel('Your password, again').fill(named('Varga').password)
  await page.keyboard.press('Enter')
  await page.locator('[data-test=signed] a:focus').waitFor()
  await expectFocus(page, /^Next study/)
  await page.keyboard.press('Enter')
  await page.waitForURL(url => url.pathname.startsWith('/reading/') && !url.pathname.endsWith(study.id))
  await visit(page, `${app.origin}/reading`)
  expect(await page.getByRole('row').filter({ hasText: study.number }).count()).toBe(0)
})

it('a value that was read off wrongly is corrected: version 2 is computed from it, version 1 opens as superseded and unchanged', async () => {
  const { page } = director
  const answer = await director.context.request.get(`${app.origin}/api/studies/${study.id}/reading`)
  const { reportId } = await answer.json() as { reportId: string }
  const first = await (await director.context.request.get(`${app.origin}/api/reports/${reportId}?version=1`)).json() as { sha256: string }
  await visit(page, `${app.origin}/reports/${reportId}`)
  await page.getByText('Drafted by Dr Amadeus Pike, MD, in training').waitFor()
  await button(page, 'Make a new version').click()
  await page.getByLabel('Corrected: a wrong side or value is mended').check()
  const run = page.locator('[data-test=correct-run]').filter({ hasText: 'motor' }).first()
  await run.locator('summary').click()
  const latency = run.getByLabel('latency, ms').first()
  const before = Number(await latency.inputValue())
  await latency.fill('0')
  await latency.press('Tab')
  await run.getByText(/0 is no reading/).waitFor()
  await latency.fill((before + 0.1).toFixed(1))
  await latency.press('Tab')
  await run.getByText(`was ${before.toFixed(1)}`).waitFor()
  await page.locator('[data-test=change]').filter({ hasText: 'latency' }).first().waitFor()
  await expectNoAxeFindings(page)
  await page.getByLabel('What changed and why').fill('The latency was read off the wrong trace.')
  await signNewVersion(page)
  await page.waitForURL(/version=2/)
  await page.getByText(`${before} ms`).first().waitFor()
  expect(await page.locator('[data-test=change]').first().innerText()).toContain((before + 0.1).toFixed(1))
  await expectNoAxeFindings(page)
  await visit(page, `${app.origin}/reports/${reportId}?version=1`)
  await page.locator('[data-test=superseded]').waitFor()
  expect((await (await director.context.request.get(`${app.origin}/api/reports/${reportId}?version=1`)).json() as { sha256: string }).sha256).toBe(first.sha256)
})

it('both chains and every signed version are as they were written', async () => {
  const { page } = director
  await visit(page, `${app.origin}/ledger`)
  await button(page, 'Verify reports and chains').click()
  await page.locator('[data-test=verdict]').getByText('Everything is as it was written').waitFor({ timeout: 60_000 })
})

async function saved(page: Page): Promise<void> {
  await page.locator('[data-test=draft-saving]').getByText(/saved \d\d:\d\d:\d\d/).waitFor()
}

/** Answers every open question before signing with a reason. */
async function answerChecks(page: Page): Promise<void> {
  for (let open = page.locator('[data-test=check-check], [data-test=check-stop]').getByRole('button', { name: 'Answer with a reason' }); await open.count() > 0;) {
    await open.first().click()
    await page.getByLabel('Reason, printed in the report').fill('Seen; it does not change the reading.')
    await button(page, 'Keep reason').click()
    await page.waitForTimeout(900)
  }
}

/** Signs; what the server asks first is answered with a reason. */
async function signNewVersion(page: Page): Promise<void> {
  await page.getByLabel(/I reviewed the data/).check()
  for (let tries = 0; tries < 3; tries++) {
    await page.getByLabel('Your password, again').fill(named('Solano').password)
    await button(page, 'Sign new version').click()
    await page.waitForTimeout(1500)
    if (/version=2/.test(page.url())) return
    await answerChecks(page)
  }
}
