import { possibleRange } from '../../catalogue/possible-range'
import { quantities, quantityOf, type Quantity, type QuantityId } from '../../catalogue/quantities'
import type { Entry } from '../../schemas/study'
import { quantityInfo } from '../quantity-info'
import { roundForPrint } from '../round-for-print'
import type { PlacedRow } from '../placed-rows'
import type { KnownRun } from '../study-context'
import { TOLERANCE } from '../tolerance'
import type { Remark } from '../types'
import { capital } from '../words'
import { addRemark, OWN_DECISION, type RemarkList } from './remark'

/**
 * Each typed number by itself: zero and negative numbers, possible and usual ranges, slips of unit and decimal point,
 * and entries that contradict each other within a row. The program asks and never converts.
 */
export function remarkOnValues(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[]): void {
  for (const placed of rows) {
    const { values } = placed.row
    for (const quantity in values) {
      const entry = values[quantity as QuantityId]
      if (typeof entry === 'number') remarkOnNumber(list, known, placed, quantity as QuantityId, entry, placed !== rows[0])
    }
    remarkOnSeries(list, known, placed)
    remarkOnContradiction(list, known, placed)
  }
}

/** The single responses of a series, as one remark for the row. */
function remarkOnSeries(list: RemarkList, known: KnownRun, { row, label }: PlacedRow): void {
  if (!row.series) return
  const quantity: QuantityId = known.technique?.kind === 'f-wave' ? 'minimumLatencyMs' : 'amplitudeMv'
  const { possible, unit } = quantityOf(quantity)
  const wrong = row.series.filter((entry): entry is number => typeof entry === 'number').find(entry => possible && (entry < possible.min || entry > possible.max))
  if (wrong === undefined || !possible) return
  addRemark(list, {
    code: 'series-impossible', strength: 'stop', runId: known.run.id, rowId: row.id, source: OWN_DECISION,
    sentence: `A response of ${plain(wrong)} ${unit} in the series (${label}) cannot be: it must be between ${possible.min} and ${possible.max} ${unit}.`,
  })
}

/** Words are made for the few numbers that need some. */
function remarkOnNumber(list: RemarkList, known: KnownRun, placed: PlacedRow, id: QuantityId, value: number, isProximal: boolean): void {
  if (!(id in quantities)) return
  const quantity = quantityOf(id)
  const said = value <= 0 && quantity.kind !== 'count' ? zero(value) : beyond(known, placed, quantity, value, isProximal)
  if (!said) return
  const { code, strength, words } = said
  addRemark(list, { runId: known.run.id, rowId: placed.row.id, quantity: id, code, strength, source: OWN_DECISION, sentence: capital(`${quantityInfo(id).label} at ${placed.label}${words}`) })
}

interface Said { code: string, strength: Remark['strength'], words: string }

function zero(value: number): Said {
  return { code: 'zero', strength: 'stop', words: value === 0 ? ': 0 is no measurement. Enter no response, technical, not done or stopped.' : ' must be above 0.' }
}

function beyond(known: KnownRun, { site }: PlacedRow, quantity: Quantity, value: number, isProximal: boolean): Said | null {
  const possible = possibleRange(quantity, site)
  if (possible && isBeyond(value, possible)) return { code: 'impossible', strength: 'stop', words: ` must be between ${rangeWords(quantity, value, possible)}` }
  const usual = usualRange(known, quantity, isProximal)
  return usual && isBeyond(value, usual) ? { code: 'unusual', strength: 'check', words: ` is usually between ${rangeWords(quantity, value, usual)}` } : null
}

type Range = NonNullable<Quantity['usual']>
const isBeyond = (value: number, { min, max }: Range) => value < min - TOLERANCE || value > max + TOLERANCE
const rangeWords = (quantity: Quantity, value: number, range: Range) =>
  `${range.min} and ${range.max}${unitOf(quantity)}; ${plain(value)} was entered.${slipHint(quantity, value, range)}`

/**
 * A response to a proximal stimulus comes later: at a usual velocity of 40 m/s and 500 mm after 12 ms more (common practice,
 * no source).
 */
const PROXIMAL_MORE_MS = 12
function usualRange(known: KnownRun, { id, usual }: Quantity, isProximal: boolean): Quantity['usual'] {
  const isLater = isProximal && known.technique?.kind === 'motor' && id === 'latencyMs'
  return usual && isLater ? { min: usual.min, max: usual.max + PROXIMAL_MORE_MS } : usual
}

const unitOf = (quantity: Quantity) => quantity.unit ? ` ${quantity.unit}` : ''
const plain = (value: number) => String(Number(roundForPrint(value, 3)))

/** What the number would be if its unit or its decimal point had slipped. */
function slipHint(quantity: Quantity, value: number, range: { min: number, max: number }): string {
  const fits = (candidate: number) => candidate >= range.min && candidate <= range.max
  if (quantity.unit === 'mV' && fits(value / 1000)) return ' Were microvolts entered? Enter millivolts.'
  if (quantity.unit === 'mV' && value < range.min) return ' Were volts or microvolts mistaken? Enter millivolts.'
  if (quantity.unit === 'µV' && fits(value * 1000)) return ' Were millivolts entered? Enter microvolts.'
  if (quantity.kind === 'distance' && fits(value * 10)) return ' Were centimetres entered? Enter millimetres.'
  if (quantity.kind === 'latency' && (fits(value / 10) || fits(value / 100))) return ' Is the decimal point missing?'
  return ''
}

/** A number beside "no response" of the same response cannot both be right. */
function remarkOnContradiction(list: RemarkList, known: KnownRun, { row, label }: PlacedRow): void {
  for (const amplitude of sizes) {
    if (!contradictsTimes(row, row.values[amplitude])) continue
    addRemark(list, { code: 'response-and-none', strength: 'stop', runId: known.run.id, rowId: row.id, quantity: amplitude, sentence: `At ${label} a number stands beside no response: correct the latency or the amplitude.` })
  }
}

const sizes = ['amplitudeMv', 'amplitudeUv'] as const
const times = ['latencyMs', 'onsetLatencyMs', 'peakLatencyMs'] as const

function contradictsTimes({ values }: PlacedRow['row'], size: Entry | undefined): boolean {
  if (size === 'no-response') return times.some(quantity => typeof values[quantity] === 'number')
  return typeof size === 'number' && times.some(quantity => values[quantity] === 'no-response')
}
