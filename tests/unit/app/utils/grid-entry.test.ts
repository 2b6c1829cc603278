import { describe, expect, it } from 'vitest'
import { quantities } from '../../../../shared/catalogue/quantities'
import { siteOf } from '../../../../shared/catalogue/nerves'
import { entryText, parseEntry, parseSeries, seriesText, type EntryPlace } from '../../../../app/utils/grid-entry'

const leg: EntryPlace = { site: siteOf('fibular-motor-edb', 'below-fibular-head'), segmentLabel: 'ankle to below fibular head' }

describe('what is taken', () => {
  it.each([
    { typed: '3.4', quantity: 'latencyMs', entry: 3.4 },
    { typed: '3,4', quantity: 'latencyMs', entry: 3.4 },
    { typed: ' 3,4 ms ', quantity: 'latencyMs', entry: 3.4 },
    { typed: '.9', quantity: 'latencyMs', entry: 0.9 },
    { typed: '5.', quantity: 'latencyMs', entry: 5 },
    { typed: '6.85', quantity: 'amplitudeMv', entry: 6.85 },
    { typed: '6.8mV', quantity: 'amplitudeMv', entry: 6.8 },
    { typed: '12 µV', quantity: 'amplitudeUv', entry: 12 },
    { typed: '12 μV', quantity: 'amplitudeUv', entry: 12 },
    { typed: '12uV', quantity: 'amplitudeUv', entry: 12 },
    { typed: '30 mV·ms', quantity: 'areaMvMs', entry: 30 },
    { typed: '215 mm', quantity: 'distanceMm', entry: 215 },
    { typed: '0', quantity: 'responseCount', entry: 0 },
    { typed: 'n', quantity: 'latencyMs', entry: 'no-response' },
    { typed: 'N', quantity: 'amplitudeUv', entry: 'no-response' },
    { typed: 'no response', quantity: 'latencyMs', entry: 'no-response' },
    { typed: 'x', quantity: 'latencyMs', entry: 'technical' },
    { typed: 'd', quantity: 'latencyMs', entry: 'not-done' },
    { typed: 's', quantity: 'latencyMs', entry: 'stopped' },
  ] as const)('"$typed" in $quantity', ({ typed, quantity, entry }) => {
    expect(parseEntry(typed, quantities[quantity])).toEqual({ kind: 'entry', entry })
  })
  it('blank stays blank', () => expect(parseEntry('  ', quantities.latencyMs)).toEqual({ kind: 'blank' }))
})

describe('what is stopped, and with which sentence', () => {
  it.each([
    { typed: '0.006', quantity: 'amplitudeUv', says: 'Amplitude must be between 0.1 and 300 µV. Was 0.006 read in mV?' },
    { typed: '9600', quantity: 'amplitudeMv', says: 'Was 9600 read in µV?' },
    { typed: '12 mV', quantity: 'amplitudeUv', says: 'This column is in µV, and 12 mV was typed. Which is it?' },
    { typed: '6 µV', quantity: 'amplitudeMv', says: 'This column is in mV, and 6 µV was typed.' },
    { typed: '21 cm', quantity: 'distanceMm', says: 'This column is in mm, and 21 cm was typed.' },
    { typed: '0', quantity: 'amplitudeMv', says: '0 is no reading. When nothing was recorded, press n for no response' },
    { typed: '-3', quantity: 'latencyMs', says: 'Latency must be between 0.3 and 100 ms.' },
    { typed: '1.234', quantity: 'latencyMs', says: 'with at most 2 decimals' },
    { typed: '14.25', quantity: 'amplitudeUv', says: 'with at most 1 decimal.' },
    { typed: '215.5', quantity: 'distanceMm', says: 'as a whole number of mm' },
    { typed: '1.234,5', quantity: 'latencyMs', says: 'Enter the latency, in ms, as a number.' },
    { typed: '3.4.5', quantity: 'latencyMs', says: 'Enter the latency, in ms, as a number.' },
    { typed: 'abc', quantity: 'latencyMs', says: '"abc" was typed.' },
    { typed: '3 bananas', quantity: 'latencyMs', says: 'Enter the latency, in ms' },
  ] as const)('"$typed" in $quantity', ({ typed, quantity, says }) => {
    const parsed = parseEntry(typed, quantities[quantity])
    expect(parsed.kind).toBe('stop')
    expect(parsed.kind === 'stop' && parsed.sentence).toContain(says)
  })
})

describe('a distance is judged by its segment', () => {
  const at = (technique: string, site: string): EntryPlace => ({ site: siteOf(technique, site) })
  it.each([
    { typed: '33', place: leg, says: 'Distance (ankle to below fibular head) must be between 60 and 700 mm. Was 33 read in cm? Look at the trace again' },
    { typed: '38', place: at('tibial-motor-ah', 'popliteal-fossa'), says: 'must be between 60 and 800 mm. Was 38 read in cm?' },
    { typed: '9', place: at('median-motor-apb', 'elbow'), says: 'Distance must be between 10 and 500 mm.' },
    { typed: '0', place: leg, says: '0 is no reading.' },
    { typed: '800', place: leg, says: 'must be between 60 and 700 mm' },
  ])('$typed stopped', ({ typed, place, says }) => {
    const parsed = parseEntry(typed, quantities.distanceMm, place)
    expect(parsed.kind === 'stop' && parsed.sentence).toContain(says)
  })
  // What is unlikely is questioned by the assessment and stored, here as on the server: one rule.
  it.each([
    { typed: '330', place: leg },
    { typed: '530', place: leg },
    { typed: '65', place: at('fibular-motor-edb', 'above-fibular-head') },
    { typed: '22', place: at('median-motor-apb', 'elbow') },
    { typed: '20', place: at('ulnar-motor-adm-short', 'elbow-0') },
  ])('$typed taken', ({ typed, place }) => {
    expect(parseEntry(typed, quantities.distanceMm, place)).toEqual({ kind: 'entry', entry: Number(typed) })
  })
})

it('a series stands in its cell as it can be typed again', () => {
  const entries = [28.1, 'no-response', 28, 'technical', 'not-done', 'stopped'] as const
  expect(seriesText(entries, 1)).toBe('28.1 n 28.0 x d s')
  expect(parseSeries(seriesText(entries, 1), quantities.minimumLatencyMs)).toEqual({ kind: 'series', entries })
  expect(parseSeries('28.1 no response 28 technical not done Stopped', quantities.minimumLatencyMs)).toEqual({ kind: 'series', entries })
})

it('a series keeps decimal commas and absences apart', () => {
  expect(parseSeries('28,1 28.4; n\n29', quantities.minimumLatencyMs)).toEqual({ kind: 'series', entries: [28.1, 28.4, 'no-response', 29] })
  expect(parseSeries('28.1 2000', quantities.minimumLatencyMs)).toMatchObject({ kind: 'stop', sentence: expect.stringContaining('Response 2:') })
})

it.each([[3.4, 0, '3.4'], [8, 1, '8.0'], [3.85, 1, '3.85'], [12, 0, '12'], ['no-response', 1, 'no response'], [undefined, 1, ''], [10, 0, '10']] as const)('%s with %i decimals stands as "%s"', (entry, decimals, text) => {
  expect(entryText(entry, decimals)).toBe(text)
})
