import type { Page } from 'playwright-core'
import { afterAll, afterEach, beforeAll, expect, it } from 'vitest'
import { startApp, type App, type Window } from './app'
import { saved, startRecording, studyOf } from './bench-start'
import { focused } from './keyboard'
import { routeRuns } from './route-study'

/** How many keys the seven-run study needs beyond the digits themselves: every one is pressed and counted. */
let app: App
let technologist: Window & { studyUrl: string }

beforeAll(async () => {
  app = await startApp()
  technologist = await startRecording(app, { protocol: 'carpal-tunnel', side: 'both', familyName: 'Ravnholt', question: 'Carpal tunnel?' })
})
afterAll(() => app.close())
afterEach(context => app.onFailure(context))

/** Tab from here to the cell; how often it was pressed. */
async function tabsTo(page: Page, label: string): Promise<number> {
  for (let tabs = 0; tabs < 12; tabs++) {
    if ((await focused(page)).name.startsWith(label)) return tabs
    await page.keyboard.press('Tab')
  }
  throw new Error(`Tab did not lead to ${label}; the focus is at ${(await focused(page)).name}.`)
}

it('50 keys beyond 86 digits and decimal signs, for 37 values', async () => {
  const { page } = technologist
  // The runs of the study in the order in which the sheet has them: limb and side, then as the protocol lays them out.
  const order = await page.locator('[data-test=run-sheet]').evaluateAll(sheets => sheets.map(sheet => sheet.getAttribute('aria-label') ?? ''))
  const runs = order.flatMap(title => routeRuns.filter(run => `${run.side} ${run.title}` === title))
  expect(runs).toHaveLength(7)
  const count = { values: 0, digits: 0, tabs: 0, spaces: 0 }
  for (const run of runs) {
    for (const [index, row] of run.rows.entries()) {
      for (const [column, text] of Object.entries(row.cells)) {
        count.tabs += await tabsTo(page, `${run.side} ${run.title}, ${row.site}, ${column}`)
        count.values += 1
        // The fixed distance of the method is one key.
        if (column === 'distance' && index === 0) {
          await page.keyboard.press('Space')
          count.spaces += 1
        }
        else {
          await page.keyboard.type(text)
          count.digits += text.length
        }
      }
    }
  }
  await page.keyboard.press('Tab')
  await saved(page)
  const { study } = await studyOf(page, technologist.studyUrl)
  const stored = routeRuns.flatMap(run => run.rows.map(row => Number(row.cells.distance)))
  expect(study.runs.flatMap(run => run.rows).map(row => row.values.distanceMm).filter(value => value !== undefined).sort()).toEqual(stored.sort())
  console.info(`Seven-run study: ${JSON.stringify(count)}, ${count.tabs + count.spaces} keys beyond the digits.`)
  expect(count).toEqual({ values: 37, digits: 86, tabs: 43, spaces: 7 })
})
