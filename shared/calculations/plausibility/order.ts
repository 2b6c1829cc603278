import type { QuantityId } from '../../catalogue/quantities'
import { numberOf } from '../computed-value'
import type { PlacedRow } from '../placed-rows'
import { fMeasures } from '../runs/f-wave'
import type { KnownRun } from '../study-context'
import { TOLERANCE } from '../tolerance'
import { addRemark, type RemarkList } from './remark'

/** Numbers that must stand in an order: proximal after distal, peak after onset, late response after the direct one. */
export function remarkOnOrder(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[]): void {
  remarkOnSites(list, known, rows)
  const kind = known.technique?.kind
  if (kind === 'motor' || kind === 'sensory' || kind === 'mixed') remarkOnRising(list, known, rows, kind === 'motor' ? 'latencyMs' : 'onsetLatencyMs')
  for (const placed of rows) {
    remarkOnPeak(list, known, placed)
    if (kind === 'f-wave') remarkOnFWave(list, known, placed)
    if (kind === 'h-reflex') remarkOnHReflex(list, known, placed)
    if (kind === 'blink') remarkOnBlink(list, known, placed)
  }
}

const numberIn = ({ row }: PlacedRow, quantity: QuantityId): number | null => {
  const entry = row.values[quantity]
  return typeof entry === 'number' ? entry : null
}

/** Sites that the technique does not have, and sites that occur twice. Trains may repeat. */
function remarkOnSites(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[]): void {
  const { technique, run } = known
  if (!technique || technique.kind === 'needle') return
  for (const [index, { row, site, label }] of rows.entries()) {
    if (!site) addRemark(list, { code: 'unknown-site', strength: 'check', runId: run.id, rowId: row.id, sentence: `The site ${label} does not belong to ${technique.label}.` })
    const isRepeated = rows.findIndex(other => other.row.site === row.site) < index
    if (isRepeated && technique.kind !== 'repetitive') addRemark(list, { code: 'site-twice', strength: 'check', runId: run.id, rowId: row.id, sentence: `${label.charAt(0).toUpperCase()}${label.slice(1)} stands twice in ${technique.label}.` })
  }
}

function remarkOnRising(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[], quantity: QuantityId): void {
  let before: { value: number, label: string } | null = null
  for (const placed of rows) {
    const value = numberIn(placed, quantity)
    if (value === null) continue
    if (before && value <= before.value + TOLERANCE) {
      addRemark(list, { code: 'latency-order', strength: 'stop', runId: known.run.id, rowId: placed.row.id, quantity, sentence: `The latency at ${placed.label} (${value} ms) must be longer than at ${before.label} (${before.value} ms).` })
    }
    before = { value, label: placed.label }
  }
}

function remarkOnPeak(list: RemarkList, known: KnownRun, placed: PlacedRow): void {
  const [onset, peak] = [numberIn(placed, 'onsetLatencyMs'), numberIn(placed, 'peakLatencyMs')]
  if (onset === null || peak === null || peak > onset + TOLERANCE) return
  addRemark(list, { code: 'peak-before-onset', strength: 'stop', runId: known.run.id, rowId: placed.row.id, quantity: 'peakLatencyMs', sentence: `The peak (${peak} ms) must come after the onset (${onset} ms).` })
}

function remarkOnFWave(list: RemarkList, known: KnownRun, placed: PlacedRow): void {
  const where = { runId: known.run.id, rowId: placed.row.id }
  const { minimum, mean, maximum, responses, stimuli } = fMeasures(placed.row)
  const m = numberIn(placed, 'mLatencyMs')
  if (minimum.kind === 'value' && m !== null && minimum.value <= m + TOLERANCE) {
    addRemark(list, { ...where, code: 'f-before-m', strength: 'stop', quantity: 'minimumLatencyMs', sentence: `The shortest F latency (${minimum.value} ms) must be longer than the M latency (${m} ms).` })
  }
  const ordered = [minimum, mean, maximum].map(numberOf).filter(value => value !== null)
  if (ordered.some((value, index) => index > 0 && value < (ordered[index - 1] as number) - TOLERANCE)) {
    addRemark(list, { ...where, code: 'f-order', strength: 'stop', sentence: 'The F latencies must stand in the order shortest, mean, longest.' })
  }
  if (responses !== null && stimuli !== null && responses > stimuli) {
    addRemark(list, { ...where, code: 'f-count', strength: 'stop', quantity: 'responseCount', sentence: `There cannot be more responses (${responses}) than stimuli (${stimuli}).` })
  }
  if (stimuli !== null && stimuli < 10) {
    addRemark(list, { ...where, code: 'f-few-stimuli', strength: 'note', quantity: 'stimulusCount', sentence: `${stimuli} stimuli: at least 10 are usual, and chronodispersion needs 10 responses.`, source: 'Fisher MA (secondary source): 10 stimuli come within 1 ms of 100' })
  }
}

function remarkOnHReflex(list: RemarkList, known: KnownRun, placed: PlacedRow): void {
  const where = { runId: known.run.id, rowId: placed.row.id }
  const [h, m, hSize, mSize] = [numberIn(placed, 'hLatencyMs'), numberIn(placed, 'mLatencyMs'), numberIn(placed, 'hAmplitudeMv'), numberIn(placed, 'mAmplitudeMv')]
  if (h !== null && m !== null && h <= m + TOLERANCE) {
    addRemark(list, { ...where, code: 'h-before-m', strength: 'stop', quantity: 'hLatencyMs', sentence: `The H latency (${h} ms) must be longer than the M latency (${m} ms).` })
  }
  if (h !== null && known.technique?.id === 'h-reflex-soleus' && (h < 20 || h > 45)) {
    addRemark(list, { ...where, code: 'h-range', strength: 'check', quantity: 'hLatencyMs', sentence: `The H latency of the soleus is usually between 20 and 45 ms; ${h} was entered.` })
  }
  if (hSize !== null && mSize !== null && hSize > mSize + TOLERANCE) {
    addRemark(list, { ...where, code: 'h-above-m', strength: 'check', quantity: 'hAmplitudeMv', sentence: `The H amplitude (${hSize} mV) is larger than the largest M amplitude (${mSize} mV): was the M response supramaximal?` })
  }
}

function remarkOnBlink(list: RemarkList, known: KnownRun, placed: PlacedRow): void {
  const r1 = numberIn(placed, 'r1Ms')
  for (const quantity of ['r2IpsilateralMs', 'r2ContralateralMs'] as const) {
    const r2 = numberIn(placed, quantity)
    if (r1 !== null && r2 !== null && r2 <= r1 + TOLERANCE) {
      addRemark(list, { code: 'r2-before-r1', strength: 'stop', runId: known.run.id, rowId: placed.row.id, quantity, sentence: `R2 (${r2} ms) must come after R1 (${r1} ms).` })
    }
  }
}
