import { possibleRange } from '#shared/catalogue/possible-range'
import { quantityOf } from '#shared/catalogue/quantities'
import type { Quantity } from '#shared/catalogue/quantities'
import { siteOf } from '#shared/catalogue/nerves'
import type { Technique } from '#shared/catalogue/types'
import { absences, type Entry } from '#shared/schemas/study'

type Typed = Entry | string | Entry[] | null

const isAbsence = (entry: unknown): boolean => (absences as readonly unknown[]).includes(entry)
const unitWords = (unit: string) => unit ? ` ${unit}` : ''
const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1)

/** Digits after the point of the shortest decimal that is this number. */
function decimalsOf(value: number): number {
  const [, fraction = '', exponent = '0'] = /^-?\d+(?:\.(\d+))?(?:e([+-]\d+))?$/.exec(String(value)) ?? []
  return Math.max(0, fraction.length - Number(exponent))
}

function checkNumber(value: number, quantity: Quantity, technique: Technique, site: string): string | null {
  const label = capital(quantity.label)
  const range = possibleRange(quantity, siteOf(technique.id, site))
  if (value === 0 && range && range.min > 0) return `${label} 0 is not a value. Enter "no response", "technical", "not done" or "stopped".`
  if (range && (value < range.min || value > range.max)) return `${label} must be between ${range.min} and ${range.max}${unitWords(quantity.unit)}.`
  if (decimalsOf(value) > quantity.typedDecimals) return quantity.typedDecimals === 0 ? `${label} must be a whole number.` : `${label} takes at most ${quantity.typedDecimals} decimal${quantity.typedDecimals === 1 ? '' : 's'}.`
  return null
}

/** A series holds responses in the unit of its kind: F-wave latencies in ms, amplitudes of a train in mV. */
const seriesQuantity = (technique: Technique) => quantityOf(technique.kind === 'f-wave' ? 'minimumLatencyMs' : 'amplitudeMv')

/**
 * The sentence with which an entry is refused because it cannot be right, or null. Unlikely entries are questioned
 * elsewhere, never refused. Ranges: shared/catalogue.
 *
 * @example
 * checkEntry(medianMotor, 'wrist', 'latencyMs', 420) // => 'Latency must be between 0.3 and 100 ms.'
 */
export function checkEntry(technique: Technique, site: string, field: string, entry: Typed): string | null {
  if (entry === null) return null
  if (field === 'series') return checkSeries(technique, site, entry)
  if (field.startsWith('ordinal:')) return checkOrdinal(technique, field.slice('ordinal:'.length), entry)
  const known = technique.quantities.find(quantity => quantity === field)
  if (!known) return 'This column does not belong to the technique.'
  if (isAbsence(entry)) return null
  return typeof entry === 'number' ? checkNumber(entry, quantityOf(known), technique, site) : 'Enter a number, or "no response", "technical", "not done" or "stopped".'
}

function checkSeries(technique: Technique, site: string, entry: Typed): string | null {
  if (technique.kind !== 'f-wave' && technique.kind !== 'repetitive') return 'This technique has no series.'
  if (!Array.isArray(entry)) return 'Enter the responses one by one.'
  const wrong = entry.map(item => typeof item === 'number' ? checkNumber(item, seriesQuantity(technique), technique, site) : null)
  const first = wrong.findIndex(message => message !== null)
  return first < 0 ? null : `Response ${first + 1}: ${wrong[first]}`
}

function checkOrdinal(technique: Technique, id: string, entry: Typed): string | null {
  const scale = technique.ordinals?.find(ordinal => ordinal.id === id)
  if (!scale) return 'This column does not belong to the technique.'
  if (typeof entry !== 'string') return `Choose the ${scale.label}.`
  return scale.choices.length === 0 || scale.choices.includes(entry) || isAbsence(entry) ? null : `Choose the ${scale.label} from the list.`
}
