import { expect, it } from 'vitest'
import { referenceTable } from '#reference-tables/index'
import { applicableLimits } from '../../../../app/utils/shelf/applicable-limits'
import { bandPictures } from '../../../../app/utils/shelf/band-picture'
import { valueWords } from '../../../../app/utils/shelf/row-words'

const table = referenceTable('aanem-ndtf-2016')!
const shelf = { tables: [table], policy: { adopted: [{ setId: table.id, version: table.version, adoptedOn: '', adoptedBy: '', verifiedRows: [] }] } }
const woman = { ageYears: 52, sexForLimits: 'female', heightCm: 162, bmi: 28.2 } as const

/** The rows of the set itself (shipped in reference-tables) say what the finder has to find. */
it.each([
  { technique: 'median-motor-apb', quantity: 'latencyMs', upper: 4.4, subgroup: /woman, 50 to 79/ },
  { technique: 'median-sensory-d2', quantity: 'peakLatencyMs', upper: 4.0, subgroup: /^$/ },
])('a woman of 52: $technique $quantity up to $upper', ({ technique, quantity, upper, subgroup }) => {
  const found = applicableLimits(shelf, technique, woman).find(each => each.quantity === quantity)?.found
  expect(found).toMatchObject({ kind: 'limits', upper: { value: upper, subgroup: expect.stringMatching(subgroup) } })
})

it('outside the ages of the set there is a reason, never a limit', () => {
  for (const each of applicableLimits(shelf, 'sural', { ...woman, ageYears: 17 })) expect(each.found).toMatchObject({ kind: 'no-limit', because: expect.stringContaining('17') })
})

it('without an adopted set nothing is judged', () => {
  for (const each of applicableLimits({ ...shelf, policy: { adopted: [] } }, 'sural', woman)) expect(each.found).toEqual({ kind: 'no-limit', because: 'no set adopted here' })
})

it('a picture is drawn where a limit steps with age, one step per row', () => {
  const rows = table.rows.filter(row => row.technique === 'median-motor-apb')
  const picture = bandPictures(rows).find(each => each.title.includes('latency'))
  const limits = rows.filter(row => row.quantity === 'latencyMs' && row.use === 'limit')
  expect(picture?.steps.map(step => step.value).sort()).toEqual(limits.map(row => row.value).sort())
  expect(picture?.steps.every(step => step.fromAge < step.toAge)).toBe(true)
})

it.each([
  [{ bound: 'upper', value: 4.4, unit: 'ms' }, '≤ 4.4 ms'],
  [{ bound: 'lower', value: null, mean: 52, sd: 4, sdMultiple: 2, scale: 'raw', unit: 'm/s' }, '52 ± 4 m/s, lower limit − 2 SD'],
  [{ bound: 'upper', value: null, regression: { intercept: 28.5, coefficients: { heightCm: 0.18, ageYears: -0.1 } }, unit: 'ms' }, '28.5 + 0.18 × heightCm − 0.1 × ageYears ms'],
] as const)('the row %j reads "%s"', (row, words) => {
  expect(valueWords({ ...table.rows[0]!, mean: undefined, sd: undefined, sdMultiple: undefined, regression: undefined, ...row })).toBe(words)
})
