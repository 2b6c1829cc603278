import * as fc from 'fast-check'
import { quantities, type QuantityId } from '#shared/catalogue/quantities'
import { techniques } from '#shared/catalogue/nerves'
import type { Technique } from '#shared/catalogue/types'
import { absences, STUDY_FORMAT, studySchema, type Study } from '#shared/schemas/study'

/** Random studies of nobody. `wild` ones hold any number that the schema accepts; the others what a person might type. */
const wildNumber = fc.oneof(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.constantFrom(0, -0, 1e-300, 1e300, -5, Number.MAX_VALUE, Number.MIN_VALUE))
const typedNumber = (quantity: QuantityId) => {
  const { possible = { min: 0.1, max: 100 }, typedDecimals } = quantities[quantity] as { possible?: { min: number, max: number }, typedDecimals: number }
  const scale = 10 ** typedDecimals
  return fc.integer({ min: Math.ceil(possible.min * scale), max: Math.floor(possible.max * scale) }).map(whole => whole / scale)
}
const entry = (quantity: QuantityId, wild: boolean) => fc.oneof(
  { weight: 8, arbitrary: wild ? fc.oneof(typedNumber(quantity), wildNumber) : typedNumber(quantity) },
  { weight: 1, arbitrary: fc.constantFrom(...absences) },
)

function valuesFor(technique: Technique | undefined, wild: boolean) {
  const ids = wild || !technique ? Object.keys(quantities) as QuantityId[] : technique.quantities
  return fc.record(Object.fromEntries(ids.map(id => [id, entry(id, wild)])), { requiredKeys: [] })
}

function rowFor(technique: Technique | undefined, wild: boolean) {
  const sites = technique?.sites.map(site => site.id) ?? []
  return fc.record({
    site: wild || sites.length === 0 ? fc.oneof(fc.constantFrom('somewhere', '__proto__', ...sites), fc.string({ minLength: 1, maxLength: 12 })) : fc.constantFrom(...sites),
    values: valuesFor(technique, wild),
    series: fc.option(fc.array(wild ? fc.oneof(wildNumber, fc.constantFrom(...absences)) : fc.oneof(typedNumber('amplitudeMv'), fc.constantFrom(...absences)), { maxLength: 12 }), { nil: undefined }),
  })
}

function runFor(wild: boolean) {
  const some = techniques.filter((technique, index) => technique.kind !== 'needle' || index % 20 === 0)
  return fc.constantFrom(...some, ...(wild ? [undefined] : [])).chain(technique => fc.record({
    technique: fc.constant(technique?.id ?? 'no-such-technique'),
    side: fc.constantFrom('right' as const, 'left' as const),
    rows: fc.array(rowFor(technique, wild), { maxLength: 4 }),
    direction: fc.option(fc.constantFrom('antidromic' as const, 'orthodromic' as const), { nil: undefined, freq: 3 }),
    repeats: fc.option(fc.nat(5).map(index => `run-${index}`), { nil: undefined }),
    notDoneBecause: fc.option(fc.constantFrom('', 'plaster cast'), { nil: undefined }),
    interpretColdBecause: fc.option(fc.constantFrom('', 'warmed for an hour'), { nil: undefined }),
    recordedAt: fc.option(fc.constantFrom('2026-12-02T10:00:00Z', '2026-12-02T11:30:00+01:00'), { nil: undefined }),
  }))
}

const day = (from: string, to: string) => fc.date({ min: new Date(from), max: new Date(to), noInvalidDate: true }).map(date => date.toISOString().slice(0, 10))

export function arbitraryStudy({ wild }: { wild: boolean }): fc.Arbitrary<Study> {
  return fc.record({
    studyDate: day('2026-01-01', '2026-12-31'),
    birthDate: wild ? day('1900-01-01', '2027-12-31') : day('1940-01-01', '2005-12-31'),
    sexForLimits: fc.constantFrom('female' as const, 'male' as const, null),
    heightCm: fc.option(fc.integer({ min: 140, max: 200 })),
    weightKg: fc.option(fc.integer({ min: 40, max: 140 })),
    referralSide: fc.constantFrom('right' as const, 'left' as const, 'both' as const, 'midline' as const, null),
    temperatures: fc.array(fc.record({
      segment: fc.constantFrom('hand' as const, 'foot' as const), side: fc.constantFrom('right' as const, 'left' as const),
      celsius: fc.integer({ min: 260, max: 370 }).map(tenths => tenths / 10), warmed: fc.boolean(),
      at: fc.option(fc.constantFrom('2026-12-02T09:50:00Z', '2026-12-02T10:10:00Z', '2026-12-02T12:00:00+01:00'), { nil: undefined }),
    }), { maxLength: 5 }),
    runs: fc.array(runFor(wild), { maxLength: 8 }),
  }).map(({ birthDate, sexForLimits, temperatures, runs, ...rest }) => studySchema.parse({
    ...rest,
    format: STUDY_FORMAT, id: 'arbitrary', patient: { birthDate, sexForLimits },
    temperatures: temperatures.map((reading, index) => ({ id: `t-${index}`, ...reading })),
    runs: runs.map((run, index) => ({ id: `run-${index}`, ...run, rows: run.rows.map((row, place) => ({ id: `row-${index}-${place}`, ...row })) })),
  }))
}
