import type { LimitRow } from '../schemas/reference-table'

/** Words for the subgroup and the age range of a limit, as people read them. */
type AgeBand = Pick<LimitRow, 'ageMinYears' | 'ageMaxYears' | 'ageMaxExclusive'>
type Banded = AgeBand & Pick<LimitRow, 'sex' | 'heightMinCm' | 'heightMaxCm' | 'bmiMin' | 'bmiMax'>

/**
 * "woman, 50 to 79", "50 to 79, BMI 24 and over", "40 to 79, height under 170 cm". Empty when nothing bands the row.
 *
 * @example
 * subgroupWords({ sex: 'female', ageMinYears: 50, ageMaxYears: 79, … }) // => 'woman, 50 to 79'
 */
export function subgroupWords(row: Banded): string {
  const words = [sexWord(row), ageWords(row), bandWords('height', row.heightMinCm, row.heightMaxCm, ' cm'), bandWords('BMI', row.bmiMin, row.bmiMax, '')]
  return words.filter(word => word !== '').join(', ')
}

const isChildBand = (row: Banded): boolean => row.ageMaxYears !== null && row.ageMaxYears < 18

function sexWord(row: Banded): string {
  if (row.sex === null) return ''
  if (isChildBand(row)) return row.sex === 'female' ? 'girl' : 'boy'
  return row.sex === 'female' ? 'woman' : 'man'
}

/**
 * "50 to 79", "60 and over", "up to 39", "4 to under 7 months".
 */
export function ageWords(row: AgeBand): string {
  const { ageMinYears: min, ageMaxYears: max } = row
  if (min === null && max === null) return ''
  if (max === null) return `${ageNumber(min!)} and over`
  if (min === null) return row.ageMaxExclusive ? `under ${ageNumber(max)}` : `up to ${ageNumber(max)}`
  if (row.ageMaxExclusive) return infantWords(min, max)
  return min === max ? ageNumber(min) : `${ageNumber(min)} to ${ageNumber(max)}`
}

function infantWords(min: number, max: number): string {
  const months = (years: number): number => years * 12
  const whole = (value: number): boolean => Math.abs(value - Math.round(value)) < 1e-6
  if (whole(months(min)) && whole(months(max))) return `${Math.round(months(min))} to under ${Math.round(months(max))} months`
  const days = (years: number): number => Math.round(years * 12 * 31)
  return `${days(min)} to under ${days(max)} days`
}

/** Age as a number for people: whole years, or months and days below one year. */
export function ageNumber(years: number): string {
  if (years >= 1 || years === 0) return String(Math.floor(years))
  const months = years * 12
  if (months < 1) return `${Math.round(months * 31)} days`
  const whole = Math.floor(months + 1e-6)
  return `${whole} ${whole === 1 ? 'month' : 'months'}`
}

function bandWords(name: string, min: number | null, max: number | null, unit: string): string {
  if (min === null && max === null) return ''
  if (min === null) return `${name} under ${max}${unit}`
  if (max === null) return `${name} ${min}${unit} and over`
  return `${name} ${min} to under ${max}${unit}`
}

/**
 * The ages that some rows cover together, merged: "19 to 79", "20 to 39, 60 to 79".
 */
export function coveredAges(rows: readonly AgeBand[]): string {
  const bands = rows.map(row => ({ ...row })).sort((a, b) => start(a) - start(b))
  const merged: AgeBand[] = []
  for (const band of bands) {
    const last = merged.at(-1)
    if (last && start(band) <= end(last) + 1e-9) extend(last, band)
    else merged.push(band)
  }
  return merged.map(ageWords).filter(word => word !== '').join(', ')
}

const start = (band: AgeBand): number => band.ageMinYears ?? 0
/** First age that is outside: completed years reach to the next birthday. */
const end = (band: AgeBand): number => band.ageMaxYears === null ? Infinity : band.ageMaxExclusive ? band.ageMaxYears : Math.floor(band.ageMaxYears) + 1

function extend(last: AgeBand, band: AgeBand): void {
  if (end(band) <= end(last)) return
  last.ageMaxYears = band.ageMaxYears
  last.ageMaxExclusive = band.ageMaxExclusive
}
