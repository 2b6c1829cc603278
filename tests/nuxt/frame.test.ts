import { mountSuspended } from '@nuxt/test-utils/runtime'
import { expect, it } from 'vitest'
import PatientBand from '~/components/frame/PatientBand.vue'
import RouteStrip from '~/components/frame/RouteStrip.vue'
import { csvRows, moments } from './frame-cases'
import { toCsv } from '~/utils/csv'
import { formatElapsed, formatMoment } from '~/utils/dates'

const band = { patientId: '1', familyName: 'Sample', givenName: 'A', birthDate: '1974-03-14', ageYears: 52, recordNumber: 'P-000001', sexForLimits: 'female', heightCm: 162, question: 'carpal tunnel?', side: 'right', cautions: ['cardiac device'], cautionsAsked: true, namesakes: 2 } as const

it('the band names the person with every mark that tells them apart', async () => {
  const text = (await mountSuspended(PatientBand, { props: { band: { ...band, cautions: [...band.cautions] } } })).text()
  for (const part of ['Sample, A', '14 March 1974 (52)', 'P-000001', 'woman, 162 cm', 'RIGHT', 'cardiac device', '2 namesakes']) expect(text).toContain(part)
  expect(text).not.toContain('no cautions')
})

it('an unasked caution is never shown as none', async () => {
  const text = (await mountSuspended(PatientBand, { props: { band: { ...band, cautions: [], cautionsAsked: false } } })).text()
  expect(text).toContain('cautions not all asked')
  expect(text).not.toContain('no cautions')
})

it('the strip says where it is and what went back', async () => {
  const node = { since: null, withWhom: null, wentBack: [], words: '' }
  const strip = await mountSuspended(RouteStrip, { props: { nodes: [
    { ...node, id: 'intake', label: 'Intake', state: 'done', words: 'attended' },
    { ...node, id: 'bench', label: 'Bench', state: 'here', words: 'returned', wentBack: [{ at: '2026-12-02T10:00:00Z', reason: 'Is the latency right?' }] },
    { ...node, id: 'reading', label: 'Reading', state: 'ahead' },
    { ...node, id: 'dispatch', label: 'Dispatch', state: 'ahead' },
  ] } })
  expect(strip.get('[aria-current=step]').text()).toContain('Bench')
  expect(strip.text()).toContain('went back 2 Dec 2026, 10:00: Is the latency right?')
})

it.each(moments)('$instant in $zone reads $text', ({ instant, zone, text }) => {
  expect(formatMoment(instant, zone)).toBe(text)
})

it.each([[59_000, 'just now'], [3_600_000 - 1, '59 min'], [3 * 3_600_000, '3 h'], [48 * 3_600_000, '2 days'], [-5, 'just now']] as const)('%i ms have passed: %s', (elapsed, text) => {
  expect(formatElapsed(elapsed)).toBe(text)
})

it.each(csvRows)('a cell "$cell" is written as $written', ({ cell, written }) => {
  expect(toCsv(['a'], [[cell]])).toBe(`a\r\n${written}\r\n`)
})
