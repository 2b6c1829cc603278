import { mountSuspended } from '@nuxt/test-utils/runtime'
import { expect, it } from 'vitest'
import type { ReportView } from '#shared/schemas/report'
import ReportSheet from '~/components/report/ReportSheet.vue'
import SidesTable from '~/components/reading/SidesTable.vue'
import { smallSource } from '../../fixtures/report-source'

const source = smallSource()
const view = {
  reportId: 'r', number: source.snapshot.number, version: 1, status: 'final', snapshot: source.snapshot, sha256: source.sha256, auditHead: source.auditHead, pdfSha256: null, superseded: false,
  versions: source.versions, route: [], band: {},
} as unknown as ReportView

it('the page of a report gives the answer before the numbers, and the hash in full', async () => {
  const page = await mountSuspended(ReportSheet, { props: { view } })
  const ids = page.findAll('[data-section]').map(each => each.attributes('data-section'))
  expect(ids.indexOf('impression')).toBeLessThan(ids.indexOf('motor'))
  expect(page.text()).toContain('RIGHT median neuropathy at the wrist.')
  expect(page.get('[data-test=sha256]').text()).toBe(source.sha256)
})

it('a value outside carries an arrow, a word and a weight, and no colour alone', async () => {
  const page = await mountSuspended(ReportSheet, { props: { view } })
  const cell = page.findAll('td').find(each => each.text().includes('5.2'))!
  expect(cell.text()).toContain('▲')
  expect(cell.text()).toContain('above the limit')
  expect(cell.find('.beyond').exists()).toBe(true)
})

it('an absent response is in words, never 0 or blank', async () => {
  const page = await mountSuspended(ReportSheet, { props: { view } })
  expect(page.get('[data-section=sensory]').text()).toContain('no response')
})

it('in the sides table one number has the tab stop: the first flag; arrow keys move on', async () => {
  const page = await mountSuspended(SidesTable, { props: { study: source.snapshot.study, assessment: source.snapshot.assessment }, attachTo: document.body })
  const stops = () => page.findAll('[data-result][tabindex="0"]').map(each => each.attributes('aria-label'))
  expect(stops()).toEqual([expect.stringMatching(/^RIGHT latency: 5.2 ms, above/)])
  await page.get('[data-result][tabindex="0"]').trigger('keydown', { key: 'ArrowDown' })
  expect(stops()).toEqual([expect.stringMatching(/^RIGHT amplitude: 6.8/)])
  await page.get('[data-result][tabindex="0"]').trigger('click')
  expect((page.emitted('explain')?.[0] as [{ print: string }])[0].print).toBe('6.8')
  page.unmount()
})
