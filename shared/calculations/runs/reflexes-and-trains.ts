import type { Entry } from '../../schemas/study'
import { numberOf, valueOf } from '../computed-value'
import { decrement, DECREMENT_RESPONSE } from '../decrement'
import { expectedHLatency, hmRatio } from '../h-reflex'
import { increment } from '../increment'
import { quantityInfo } from '../quantity-info'
import type { PlacedRow } from '../placed-rows'
import { add, addTyped, askerOf, cellOf, type RunMaker } from './run-maker'

const plainLabel = (quantity: string) => quantityInfo(quantity).label

/** Results of an H-reflex run: what was typed, H to M ratio, and the latency expected for leg length and age. */
export function assessHReflex(maker: RunMaker): void {
  for (const placed of maker.rows) {
    addTyped(maker, placed, { place: '', asker: askerOf(maker, null), askAt: null, supporting: quantity => quantity !== 'hLatencyMs' })
    const [h, m] = [cellOf(placed.row, 'hAmplitudeMv'), cellOf(placed.row, 'mAmplitudeMv')]
    const common = { typed: false, supporting: true, asker: askerOf(maker, null), askAt: null }
    if (h.kind === 'value' && m.kind === 'value') {
      add(maker, placed, { ...common, quantity: 'hmRatio', label: plainLabel('hmRatio'), value: hmRatio({ hAmplitudeMv: h.value, mAmplitudeMv: m.value }), how: { formula: `${h.value} mV / ${m.value} mV`, source: 'common practice' } })
    }
    const length = placed.row.values.legLengthMm
    if (typeof length === 'number') {
      add(maker, placed, { ...common, quantity: 'hExpectedMs', label: plainLabel('hExpectedMs'), value: expectedHLatency({ legLengthMm: length, ageYears: maker.context.person.ageYears }), how: { formula: `9.14 + 0.46 x ${length / 10} cm + 0.1 x age`, source: 'Braddom and Johnson, Arch Phys Med Rehabil 1974;55:161-166, from memory' } })
    }
  }
}

/** Results of a blink reflex run. */
export function assessBlink(maker: RunMaker): void {
  for (const placed of maker.rows) {
    addTyped(maker, placed, { place: '', asker: askerOf(maker, null), askAt: null, supporting: () => false })
    const [same, other] = [cellOf(placed.row, 'r2IpsilateralMs'), cellOf(placed.row, 'r2ContralateralMs')]
    if (same.kind !== 'value' || other.kind !== 'value') continue
    add(maker, placed, {
      quantity: 'r2DifferenceMs', label: 'R2, difference of the two eyes', typed: false, supporting: true,
      value: valueOf(Math.abs(other.value - same.value), Math.SQRT2 * maker.context.expanded.latencyMs), asker: askerOf(maker, null), askAt: null,
      how: { formula: `${same.value} ms and ${other.value} ms`, source: 'arithmetic' },
    })
  }
}

/** Stimuli at this rate or faster are a fast train: it may grow, and no decrement is read from it. */
export const FAST_TRAIN_HZ = 10

/** Amplitudes of a train in mV: its series, or the one amplitude typed for it. */
export function trainOf(row: PlacedRow['row']): readonly (Entry | undefined)[] {
  return row.series?.length ? row.series : [row.values.amplitudeMv]
}

export function isFastTrain(row: PlacedRow['row']): boolean {
  const rate = row.values.rateHz
  return row.site === 'high-rate' || (typeof rate === 'number' && rate >= FAST_TRAIN_HZ)
}

/** Results of repetitive stimulation: decrement of each slow train, increment after exercise and within fast trains. */
export function assessRepetitive(maker: RunMaker): void {
  const rest = maker.rows.find(placed => placed.row.site === 'rest')
  for (const placed of maker.rows) {
    const label = trainLabel(placed)
    addTyped(maker, placed, { place: `, ${label}`, asker: askerOf(maker, null), askAt: placed.row.site, supporting: () => true })
    if (isFastTrain(placed.row)) addFastIncrement(maker, placed, label)
    else addSlow(maker, placed, label, rest)
  }
}

function trainLabel({ row, label }: PlacedRow): string {
  const seconds = row.values.secondsAfterExercise
  return typeof seconds === 'number' && row.site !== 'rest' ? `${label}, ${seconds} s` : label
}

function addSlow(maker: RunMaker, placed: PlacedRow, label: string, rest: PlacedRow | undefined): void {
  const train = trainOf(placed.row)
  if (placed.row.series?.length) {
    const value = decrement(train)
    add(maker, placed, {
      quantity: 'decrementPercent', at: placed.row.site, label: `decrement, ${label}`, typed: false, value, asker: askerOf(maker, null), askAt: null,
      how: { formula: `100 x (first - response ${DECREMENT_RESPONSE}) / first`, source: 'page of the Norwegian society on myasthenia (read)' },
    })
  }
  const [before, after] = [rest && trainOf(rest.row)[0], train[0]]
  if (!rest || rest === placed || typeof before !== 'number' || typeof after !== 'number') return
  addIncrement(maker, placed, label, before, after)
}

function addFastIncrement(maker: RunMaker, placed: PlacedRow, label: string): void {
  const numbers = (placed.row.series ?? []).filter((entry): entry is number => typeof entry === 'number')
  const first = placed.row.series?.[0]
  if (typeof first === 'number' && numbers.length > 1) addIncrement(maker, placed, label, first, Math.max(...numbers))
}

function addIncrement(maker: RunMaker, placed: PlacedRow, label: string, beforeMv: number, afterMv: number): void {
  const value = increment({ beforeMv, afterMv })
  add(maker, placed, {
    quantity: 'incrementPercent', at: placed.row.site, label: `increment, ${label}`, typed: false, value, supporting: true, asker: askerOf(maker, null), askAt: null,
    how: numberOf(value) === null ? undefined : { formula: `from ${beforeMv} mV to ${afterMv} mV`, source: 'Lipka et al., Muscle Nerve 2020, doi:10.1002/mus.26885' },
  })
}
