import { possibleRange } from '#shared/catalogue/possible-range'
import type { Quantity } from '#shared/catalogue/quantities'
import type { StimulationSite } from '#shared/catalogue/types'
import { absenceLabels, absences, type Absence, type Entry } from '#shared/schemas/study'

/** What typed text means: nothing, an entry that can be stored, or a stop with the sentence to show. Nothing is ever converted. */
export type ParsedEntry = { kind: 'blank' } | { kind: 'entry', entry: Entry } | { kind: 'stop', sentence: string }

/** What the range of a distance depends on. */
export interface EntryPlace {
  site?: StimulationSite
  /** "ankle to below the fibular head": named in the sentence. */
  segmentLabel?: string
}

/** The place as it was where nothing of it changed. */
export const samePlace = (before: EntryPlace | undefined, now: EntryPlace): EntryPlace =>
  before && before.site === now.site && before.segmentLabel === now.segmentLabel ? before : now

/** One letter each, at the start of a cell. */
export const absenceKeys: Record<string, Absence> = { n: 'no-response', x: 'technical', d: 'not-done', s: 'stopped' }

const letterOf = Object.fromEntries(Object.entries(absenceKeys).map(([letter, absence]) => [absence, letter])) as Record<Absence, string>

/**
 * How a stored series stands in its cell: single responses with a blank between them, an absence by its letter.
 *
 * @example seriesText([28.1, 'no-response'], 1) // => '28.1 n'
 */
export function seriesText(entries: readonly Entry[], decimals = 0): string {
  return entries.map(entry => typeof entry === 'number' ? entryText(entry, decimals) : letterOf[entry]).join(' ')
}

/** Ways of writing each unit; small letters, no blanks. The Greek mu and the letter u stand for the micro sign. */
const unitSpellings: Record<string, readonly string[]> = {
  'µV': ['µv', 'μv', 'uv'], 'mV': ['mv'], 'ms': ['ms', 'msec'], 'mm': ['mm'], 'mV·ms': ['mv·ms', 'mvms', 'mv*ms', 'mv.ms'], 'mA': ['ma'], 'Hz': ['hz'], 's': ['s', 'sec'],
  'cm': ['cm'], 'm': ['m'], 'V': ['v'], 'µs': ['µs', 'μs', 'us'], 'm/s': ['m/s'], '%': ['%'], '°C': ['°c'],
}
const unitOf = (text: string) => Object.keys(unitSpellings).find(unit => unitSpellings[unit]?.includes(text.toLowerCase().replace(/\s/g, '')))

const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1)
const withUnit = (text: string, unit: string) => unit ? `${text} ${unit}` : text
const stop = (sentence: string): ParsedEntry => ({ kind: 'stop', sentence })

/** Units a reading is mistaken in, with the factor to the field's own. */
const slips: Record<string, { unit: string, factor: number }[]> = {
  µV: [{ unit: 'mV', factor: 1000 }],
  mV: [{ unit: 'µV', factor: 0.001 }],
  mm: [{ unit: 'cm', factor: 10 }],
  ms: [{ unit: 's', factor: 1000 }, { unit: 'µs', factor: 0.001 }],
}

/** "Was 0.006 read in mV?": a question, never a conversion. */
function slipQuestion(value: number, quantity: Quantity, range: { min: number, max: number }): string {
  const slip = slips[quantity.unit]?.find(({ factor }) => value * factor >= range.min && value * factor <= range.max)
  return slip ? ` Was ${value} read in ${slip.unit}? Look at the trace again and enter the ${quantity.label} in ${quantity.unit}.` : ''
}

/** Only what cannot be right is stopped; what is unlikely is questioned beside the cell, and stored. */
function rangeStop(value: number, quantity: Quantity, { site, segmentLabel }: EntryPlace): string | null {
  const range = possibleRange(quantity, site)
  if (!range || (value >= range.min && value <= range.max)) return null
  if (value === 0) return '0 is no reading. When nothing was recorded, press n for no response or x for technical.'
  const where = quantity.kind === 'distance' && segmentLabel ? ` (${segmentLabel})` : ''
  return `${capital(quantity.label)}${where} must be between ${withUnit(`${range.min} and ${range.max}`, quantity.unit)}.${slipQuestion(value, quantity, usualRange(quantity, site) ?? range)}`
}

function usualRange(quantity: Quantity, site: StimulationSite | undefined): { min: number, max: number } | undefined {
  const segment = quantity.id === 'distanceMm' ? site?.segmentMm : undefined
  return segment ? { min: segment.usualMin, max: segment.usualMax } : quantity.usual
}

function decimalsStop(digits: string, quantity: Quantity): string | null {
  const decimals = digits.split('.')[1]?.length ?? 0
  if (decimals <= quantity.typedDecimals) return null
  if (quantity.typedDecimals === 0) return `Enter the ${quantity.label} as a whole number${quantity.unit ? ` of ${quantity.unit}` : ''}.`
  return `Enter the ${quantity.label} with at most ${quantity.typedDecimals} ${quantity.typedDecimals === 1 ? 'decimal' : 'decimals'}.`
}

function absenceOf(text: string): Absence | undefined {
  const words = text.toLowerCase()
  return absenceKeys[words] ?? absences.find(absence => absence === words || absenceLabels[absence] === words)
}

/** Digits with a decimal point or comma, and whatever stands behind them. */
const numberPattern = /^([+-]?(?:\d+(?:[.,]\d*)?|[.,]\d+))\s*(.*)$/

/**
 * Reads what was typed or pasted into one cell. Comma and point are both decimal signs; the field's own unit may be
 * typed along, any other is refused with a question.
 *
 * @example parseEntry('3,4 ms', latency) // => { kind: 'entry', entry: 3.4 }
 * @example parseEntry('n', latency) // => { kind: 'entry', entry: 'no-response' }
 * @example parseEntry('0.006', amplitudeUv) // => { kind: 'stop', sentence: 'Amplitude must be between 0.1 and 300 µV. Was 0.006 read in mV? …' }
 */
export function parseEntry(typed: string, quantity: Quantity, place: EntryPlace = {}): ParsedEntry {
  const text = typed.trim()
  if (text === '') return { kind: 'blank' }
  const absence = absenceOf(text)
  if (absence) return { kind: 'entry', entry: absence }
  const match = numberPattern.exec(text)
  const unit = match?.[2] ? unitOf(match[2]) : quantity.unit
  if (!match || unit === undefined) return stop(`Enter the ${quantity.label}${quantity.unit ? `, in ${quantity.unit}` : ''}, as a number. "${text}" was typed.`)
  const digits = match[1]!.replace(',', '.')
  if (match[2] && unit !== quantity.unit) return stop(`This column is in ${quantity.unit || 'plain numbers'}, and ${digits} ${unit} was typed. Which is it? Enter the ${quantity.label}${quantity.unit ? ` in ${quantity.unit}` : ''}.`)
  const sentence = rangeStop(Number(digits), quantity, place) ?? decimalsStop(digits, quantity)
  return sentence ? stop(sentence) : { kind: 'entry', entry: Number(digits) }
}

/**
 * Reads a series: single responses set apart by blanks, semicolons or line ends; the comma stays a decimal sign.
 *
 * @example parseSeries('28,1 28.4 n', minimumLatency) // => { kind: 'series', entries: [28.1, 28.4, 'no-response'] }
 */
export function parseSeries(typed: string, quantity: Quantity): { kind: 'series', entries: Entry[] } | { kind: 'stop', sentence: string } {
  const entries: Entry[] = []
  // An absence may be two words; single responses are set apart by blanks.
  const text = absences.reduce((words, absence) => words.replaceAll(new RegExp(absenceLabels[absence], 'gi'), letterOf[absence]), typed)
  for (const [index, part] of text.split(/[\s;]+/).filter(Boolean).entries()) {
    const parsed = parseEntry(part, quantity)
    if (parsed.kind === 'stop') return { kind: 'stop', sentence: `Response ${index + 1}: ${parsed.sentence}` }
    if (parsed.kind === 'entry') entries.push(parsed.entry)
  }
  return { kind: 'series', entries }
}

/**
 * How a stored entry stands in its cell: a decimal point, at least the decimals of its quantity (8 becomes 8.0) and never
 * fewer digits than were typed; absences in words.
 *
 * @example entryText(8, 1) // => '8.0'
 */
export function entryText(entry: Entry | undefined | null, decimals = 0): string {
  if (entry === undefined || entry === null) return ''
  if (typeof entry !== 'number') return absenceLabels[entry]
  const [whole, fraction = ''] = String(entry).split('.')
  return fraction.length >= decimals ? String(entry) : `${whole}.${fraction.padEnd(decimals, '0')}`
}
