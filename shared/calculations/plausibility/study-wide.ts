import { capital, otherSide } from '../words'
import type { QuantityId } from '../../catalogue/quantities'
import type { Side } from '../../schemas/common'
import { standingRun, type KnownRun, type StudyContext } from '../study-context'
import { numberOf } from '../computed-value'
import type { ComparisonAssessment } from '../types'
import { roundForPrint } from '../round-for-print'
import { addRemark, hasResponse, runName, sideWord, type RemarkList } from './remark'

/** What is seen only when runs are looked at together: sides, copies, doubles, and pictures that do not go together. */
export function remarkOnStudy(list: RemarkList, context: StudyContext, comparisons: readonly ComparisonAssessment[]): void {
  const measured = context.runs.filter(known => known.measured && known.supersededBy === undefined)
  remarkOnReferralSide(list, context, measured)
  remarkOnDoubles(list, context, measured)
  remarkOnMirrored(list, context, measured)
  remarkOnSuralAlone(list, measured)
  remarkOnSensoryBesideLatency(list, context)
  remarkOnHalfAmplitude(list, comparisons)
  for (const known of context.runs) {
    if (!known.technique) addRemark(list, { code: 'unknown-technique', strength: 'stop', runId: known.run.id, sentence: `The technique ${known.run.technique} is not in the catalogue: nothing of this run can be judged.` })
  }
}

/** The other side alone: a comparison side is usual, the wrong one is not. */
function remarkOnReferralSide(list: RemarkList, context: StudyContext, measured: readonly KnownRun[]): void {
  const asked = context.study.referralSide
  if (asked !== 'right' && asked !== 'left') return
  const sides = new Set<Side>(measured.map(known => known.run.side))
  if (sides.size !== 1 || sides.has(asked)) return
  addRemark(list, { code: 'side-unlike-referral', strength: 'check', sentence: `The referral asks for the ${sideWord(asked)} side; only the ${sideWord(otherSide(asked))} was recorded.` })
}

function remarkOnDoubles(list: RemarkList, context: StudyContext, measured: readonly KnownRun[]): void {
  if (measured.every(known => standingRun(context, known.run.technique, known.run.side) === known)) return
  const seen = new Map<string, KnownRun>()
  // By id, so that the order of the runs does not decide which one is named.
  for (const known of measured.toSorted((a, b) => a.run.id < b.run.id ? -1 : 1)) {
    const key = `${known.run.technique}/${known.run.side}`
    const before = seen.get(key)
    seen.set(key, known)
    const isNeedle = known.technique?.kind === 'needle'
    if (!before || isNeedle || known.run.repeats !== undefined || before.run.repeats !== undefined) continue
    addRemark(list, { code: 'recorded-twice', strength: 'check', runId: known.run.id, sentence: `${runName(known)} was recorded twice: say which one repeats the other, or remove one.` })
  }
}

/** Every number the same on both sides is rather a copy, or one side recorded twice. */
function remarkOnMirrored(list: RemarkList, context: StudyContext, measured: readonly KnownRun[]): void {
  for (const right of measured) {
    if (right.run.side !== 'right') continue
    const left = standingRun(context, right.run.technique, 'left')
    if (!left) continue
    if (!isCopy(right, left)) continue
    addRemark(list, { code: 'sides-identical', strength: 'check', runId: right.run.id, sentence: `Every number of ${runName(right)} is the same on the LEFT: was one side recorded twice, or copied?` })
  }
}

/** At least three numbers and every one the same; distances are often alike and do not count. */
function isCopy(right: KnownRun, left: KnownRun): boolean {
  if (right.rows.length !== left.rows.length) return false
  let count = 0
  for (const [index, { row }] of right.rows.entries()) {
    const other = left.rows[index]?.row
    if (!other || other.site !== row.site || Object.keys(row.values).length !== Object.keys(other.values).length) return false
    for (const quantity in row.values) {
      if (quantity === 'distanceMm') continue
      const entry = row.values[quantity as QuantityId]
      if (entry !== other.values[quantity as QuantityId]) return false
      if (typeof entry === 'number') count += 1
    }
  }
  return count >= 3
}

const isAnswered = ({ run }: KnownRun) => run.rows.some(hasResponse)
const isSilent = (known: KnownRun) => !isAnswered(known) && known.run.rows.some(row => Object.values(row.values).includes('no-response'))

function remarkOnSuralAlone(list: RemarkList, measured: readonly KnownRun[]): void {
  const nerves = measured.filter(({ technique }) => technique && ['motor', 'sensory', 'mixed'].includes(technique.kind))
  const sural = nerves.filter(known => known.run.technique === 'sural' && isAnswered(known))
  const others = nerves.filter(known => known.run.technique !== 'sural')
  const [first] = sural
  if (!first || others.length < 3 || !others.every(isSilent)) return
  addRemark(list, { code: 'sural-alone', strength: 'check', runId: first.run.id, sentence: 'The sural response is there and every other response absent: check electrodes, leads and stimulator before believing it.' })
}

/** Beyond this distal latency the sensory response is seldom left. */
const LATENCY_WITH_SENSORY_MS = 7.7

function remarkOnSensoryBesideLatency(list: RemarkList, context: StudyContext): void {
  for (const side of ['right', 'left'] as const) {
    const motor = standingRun(context, 'median-motor-apb', side)
    const sensory = standingRun(context, 'median-sensory-d2', side)
    const latency = motor?.usual?.row.values.latencyMs
    if (!motor || !sensory || typeof latency !== 'number' || latency <= LATENCY_WITH_SENSORY_MS || !isAnswered(sensory)) continue
    addRemark(list, { code: 'sensory-beside-long-latency', strength: 'note', runId: motor.run.id, sentence: `A ${sideWord(side)} median sensory response beside a distal motor latency of ${latency} ms is unusual: check stimulation and recording.`, source: 'Clin Neurol Neurosurg 2016;148:45-48, doi:10.1016/j.clineuro.2016.06.019 (read)' })
  }
}

/** A difference of half is a question to the reader, never a flag (number 6 of the decisions on numbers). */
function remarkOnHalfAmplitude(list: RemarkList, comparisons: readonly ComparisonAssessment[]): void {
  for (const comparison of comparisons) {
    for (const result of comparison.results) {
      const difference = numberOf(result.value)
      if (result.quantity !== 'sideDifferencePercent' || !result.at?.startsWith('amplitude') || difference === null || difference <= 50 + 1e-9 || result.flagged) continue
      addRemark(list, { code: `side-amplitude/${comparison.id}`, strength: 'note', quantity: result.quantity, sentence: `${capital(comparison.title)}: the amplitude differs by ${roundForPrint(difference, 0)} % between the sides. A question to the reader, not a flag.`, source: 'usual 50 %, from memory (Buschbacher; textbooks)' })
    }
  }
}
