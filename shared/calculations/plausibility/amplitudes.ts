import { siteOf } from '../../catalogue/nerves'
import { numberOf } from '../computed-value'
import { keepsFalling } from '../decrement'
import { roundForPrint } from '../round-for-print'
import { isFastTrain, trainOf } from '../runs/reflexes-and-trains'
import type { PlacedRow } from '../placed-rows'
import type { KnownRun } from '../study-context'
import { absenceLabels } from '../../schemas/study'
import type { Remark, RunAssessment } from '../types'
import { addRemark, hasResponse, type RemarkList } from './remark'

/** Difference between sites that asks for a look, in per cent: formula collection F1.6, from memory. */
export const NOTABLE_PERCENT = 20
const ANOMALY_SOURCE = 'Martin-Gruber in 19.5 % of forearms (published); the 20 % from memory'

/** Amplitudes along one nerve: larger above than below, a fall without slowing, trains that only fall, gaps. */
export function remarkOnAmplitudes(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[], assessed: RunAssessment): void {
  const kind = known.technique?.kind
  if (kind === 'motor') {
    for (const [index, placed] of rows.entries()) {
      const previous = rows[index - 1]
      if (previous) remarkOnPair(list, known, previous, placed, assessed)
    }
  }
  if (kind === 'repetitive') for (const placed of rows) remarkOnTrain(list, known, placed)
  remarkOnGaps(list, known, rows)
}

function remarkOnPair(list: RemarkList, known: KnownRun, previous: PlacedRow, placed: PlacedRow, assessed: RunAssessment): void {
  const [distal, proximal] = [previous.row.values.amplitudeMv, placed.row.values.amplitudeMv]
  if (typeof distal !== 'number' || typeof proximal !== 'number' || distal <= 0) return
  const fall = 100 * (1 - proximal / distal)
  if (Math.abs(fall) <= NOTABLE_PERCENT) return
  const where = { runId: known.run.id, rowId: placed.row.id, quantity: 'amplitudeMv' }
  remarkOnStimulus(list, known, previous, placed, fall)
  const beside = besideWords(known)
  if (-fall > NOTABLE_PERCENT) {
    const sentence = `The amplitude at ${placed.label} is ${roundForPrint(-fall, 0)} % larger than at ${previous.label}: ${largerReason(known)}`
    addRemark(list, { ...where, code: 'proximal-larger', source: ANOMALY_SOURCE, ...(beside ? { strength: 'note', sentence: `${sentence} ${beside}` } : { strength: 'check', sentence, ...larger(known) }) })
  }
  else if (fall > NOTABLE_PERCENT && isUlnarForearm(known, placed) && !isSlowed(assessed, placed)) {
    const sentence = `The amplitude falls by ${roundForPrint(fall, 0)} % from ${previous.label} to ${placed.label} without slowing: fibres may cross from the median nerve in the forearm.`
    addRemark(list, { ...where, code: 'martin-gruber', source: ANOMALY_SOURCE, ...(beside ? { strength: 'note', sentence: `${sentence} ${beside}` } : { strength: 'check', sentence, suggestion: medianAtElbow(known) }) })
  }
}

/** What stimulating beside the line gave: once it was looked at, the question is the reader's. */
function besideWords({ asides }: KnownRun): string {
  const said = asides.flatMap(({ row, label }) => {
    const amplitude = row.values.amplitudeMv
    return amplitude === undefined ? [] : [`${label} ${typeof amplitude === 'number' ? `${roundForPrint(amplitude, 1)} mV` : absenceLabels[amplitude]}`]
  })
  return said.length > 0 ? `Stimulated beside it, in the same muscle: ${said.join(', ')}.` : ''
}

function largerReason(known: KnownRun): string {
  if (known.technique?.nerve === 'fibular') return 'was the stimulus at the ankle strong enough? Part of the muscle may be supplied behind the lateral malleolus.'
  if (known.technique?.nerve === 'median') return 'was the stimulus at the wrist strong enough, did it spread at the elbow? Fibres may cross to the ulnar nerve in the forearm.'
  return 'was the distal stimulus strong enough, did the proximal one spread to a neighbour?'
}

/** What to add, where the numbers hint at a crossing of fibres. */
function larger({ run, technique }: KnownRun): Pick<Remark, 'suggestion'> {
  if (technique?.id === 'fibular-motor-edb') return { suggestion: { sentence: 'Stimulate behind the lateral malleolus, recording the same muscle.', ...siteIfKnown(technique.id, 'lateral-malleolus'), side: run.side } }
  if (technique?.nerve === 'median') return { suggestion: { sentence: 'Stimulate the ulnar nerve at the wrist and at the elbow, recording the same muscle.', ...siteIfKnown(technique.id, 'ulnar-wrist'), side: run.side } }
  return {}
}

function medianAtElbow({ run, technique }: KnownRun): NonNullable<Remark['suggestion']> {
  return { sentence: 'Stimulate the median nerve at the elbow, recording the same muscle.', ...siteIfKnown(technique?.id ?? '', 'median-elbow'), side: run.side }
}

const siteIfKnown = (technique: string, site: string) => siteOf(technique, site) ? { addTechnique: technique, addSite: site } : {}

const isUlnarForearm = ({ technique }: KnownRun, placed: PlacedRow) => technique?.nerve === 'ulnar' && placed.site?.segment?.id === 'forearm'

function isSlowed(assessed: RunAssessment, placed: PlacedRow): boolean {
  const velocity = assessed.results.find(result => result.rowId === placed.row.id && result.quantity === 'velocityMps')
  return velocity?.flagged === true || velocity?.verdict.kind === 'cold' || (numberOf(velocity?.value) ?? Number.POSITIVE_INFINITY) < 40
}

/** A train that falls to its last response without levelling off. */
function remarkOnTrain(list: RemarkList, known: KnownRun, { row, label }: PlacedRow): void {
  const where = { runId: known.run.id, rowId: row.id }
  if (!isFastTrain(row) && keepsFalling(trainOf(row))) {
    addRemark(list, { ...where, code: 'train-keeps-falling', strength: 'check', sentence: `The train ${label} falls to its last response without levelling off: check the electrodes and movement, and repeat it.`, source: 'pages of the Norwegian society on slow trains (read)' })
  }
  const rate = row.values.rateHz
  if (typeof rate === 'number' && !isFastTrain(row) && (rate < 2 || rate > 5)) {
    addRemark(list, { ...where, code: 'train-rate', strength: 'note', quantity: 'rateHz', sentence: `A decrement is usually read at 2 to 5 Hz; ${rate} Hz was entered.`, source: 'JNNP teaching table (read)' })
  }
}

/** A response that fell while the stimulus did not grow: perhaps not all fibres were reached. */
function remarkOnStimulus(list: RemarkList, known: KnownRun, previous: PlacedRow, placed: PlacedRow, fall: number): void {
  const [distal, proximal] = [previous.row.values.stimulusMa, placed.row.values.stimulusMa]
  if (fall <= NOTABLE_PERCENT || typeof distal !== 'number' || typeof proximal !== 'number' || proximal > distal) return
  addRemark(list, { code: 'weak-stimulus', strength: 'check', runId: known.run.id, rowId: placed.row.id, quantity: 'stimulusMa', sentence: `The response at ${placed.label} is smaller than at ${previous.label} and the stimulus no stronger (${proximal} mA): was it supramaximal?` })
}

/** What a row that was begun has to hold, in words. */
const neededWords = {
  motor: [['latencyMs', 'latency'], ['amplitudeMv', 'amplitude']],
  sensory: [['onsetLatencyMs', 'onset latency'], ['amplitudeUv', 'amplitude']],
} as const

/** A column that was begun and left out in one row. */
function remarkOnGaps(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[]): void {
  const kind = known.technique?.kind
  if (kind !== 'motor' && kind !== 'sensory' && kind !== 'mixed') return
  const started = rows.filter(({ row }) => hasResponse(row))
  const needed = kind === 'motor' ? neededWords.motor : neededWords.sensory
  const hasDurations = kind === 'motor' && started.length > 1 && started.some(({ row }) => typeof row.values.durationMs === 'number')
  for (const { row, label } of started) {
    for (const [quantity, words] of needed) {
      if (row.values[quantity] === undefined) addRemark(list, { code: 'empty', strength: 'note', runId: known.run.id, rowId: row.id, quantity, sentence: `The ${words} at ${label} is empty.` })
    }
    if (row.values.distanceMm === undefined) addRemark(list, { code: 'empty', strength: 'note', runId: known.run.id, rowId: row.id, quantity: 'distanceMm', sentence: `The distance at ${label} is empty: no velocity can be computed and no limit at a fixed distance applied.` })
    if (hasDurations && row.values.durationMs === undefined) addRemark(list, { code: 'empty', strength: 'note', runId: known.run.id, rowId: row.id, quantity: 'durationMs', sentence: `The duration at ${label} is empty: dispersion cannot be judged there.` })
  }
}
