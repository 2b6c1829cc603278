import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { ageInYears, ageOnDate } from '#shared/calculations/age-on-date'
import { bodyMassIndex, oneDecimal } from '#shared/calculations/bmi'

describe('age on the study date', () => {
  it.each([
    { born: '1974-03-14', on: '2026-12-02', years: 52, months: 632, days: 18 },
    { born: '1974-03-14', on: '2026-03-13', years: 51, months: 623, days: 27 },
    { born: '1974-03-14', on: '2026-03-14', years: 52, months: 624, days: 0 },
    { born: '2000-02-29', on: '2026-02-27', years: 25, months: 311, days: 29 },
    { born: '2000-02-29', on: '2026-02-28', years: 26, months: 312, days: 0 },
    { born: '2000-02-29', on: '2024-02-28', years: 23, months: 287, days: 30 },
    { born: '2026-01-31', on: '2026-02-28', years: 0, months: 1, days: 0 },
    { born: '2026-12-30', on: '2027-01-02', years: 0, months: 0, days: 3 },
    { born: '2026-06-10', on: '2026-06-10', years: 0, months: 0, days: 0 },
  ])('$born on $on: $years years, $months months, $days days', ({ born, on, ...age }) => {
    expect(ageOnDate(born, on)).toEqual(age)
  })

  it.each([['2026-01-02', '2026-01-01'], ['1974', '2026-01-01'], ['1974-03-14', 'today']])('none for %s on %s', (born, on) => {
    expect(ageOnDate(born, on)).toBeNull()
    expect(ageInYears(born, on)).toBeNull()
  })

  it('is a fraction below one year and meets month bands at their edges', () => {
    expect(ageInYears('2026-01-10', '2026-06-10')).toBe(5 / 12)
    expect(ageInYears('2026-01-10', '2026-06-09')!).toBeLessThan(5 / 12)
    expect(ageInYears('2026-01-10', '2027-01-09')!).toBeLessThan(1)
    expect(ageInYears('2026-01-10', '2027-01-10')).toBe(1)
  })

  it('never grows younger', () => {
    const day = fc.integer({ min: 0, max: 40_000 }).map(days => new Date(Date.UTC(1920, 0, 1 + days)).toISOString().slice(0, 10))
    fc.assert(fc.property(day, day, day, (...days) => {
      const [born, first, second] = days.sort() as [string, string, string]
      expect(ageInYears(born, second)!).toBeGreaterThanOrEqual(ageInYears(born, first)!)
      expect(ageOnDate(born, second)!.days).toBeGreaterThanOrEqual(0)
    }))
  })
})

describe('body mass index', () => {
  it.each([
    { heightCm: 162, weightKg: 74, bmi: 28.2 },
    { heightCm: 170, weightKg: 69.2, bmi: 23.9 },
    { heightCm: 170, weightKg: 69.3, bmi: 24 },
    { heightCm: 200, weightKg: 95.8, bmi: 24 },
  ])('$weightKg kg at $heightCm cm is $bmi', ({ bmi, ...size }) => {
    expect(bodyMassIndex(size)).toBe(bmi)
  })

  it.each([{ heightCm: null, weightKg: 70 }, { heightCm: 170, weightKg: null }, { heightCm: 0, weightKg: 70 }, { heightCm: 170, weightKg: 0 }])('none for %o', (size) => {
    expect(bodyMassIndex(size)).toBeNull()
  })

  it('rounds a half up although binary holds it too low', () => {
    expect(oneDecimal(23.95)).toBe(24)
    expect(oneDecimal(23.949)).toBe(23.9)
  })
})
