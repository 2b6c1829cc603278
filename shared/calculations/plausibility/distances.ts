import { quantityOf } from '../../catalogue/quantities'
import { numberOf } from '../computed-value'
import { roundForPrint } from '../round-for-print'
import type { PlacedRow } from '../placed-rows'
import type { KnownRun } from '../study-context'
import type { Result, RunAssessment } from '../types'
import { capital } from '../words'
import { addRemark, OWN_DECISION, type RemarkList } from './remark'

/** A shorter motor segment is declared, never assumed (number 10 of the decisions on numbers). */
export const SHORT_SEGMENT_MM = 80
/** Motor velocity over a whole lower leg that is rarely passed: common practice. */
const LEG_SEGMENT_MPS = 55

/** Distances per segment, velocities that come of them, and the position of the elbow. */
export function remarkOnDistances(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[], assessed: RunAssessment): void {
  for (const [index, placed] of rows.entries()) {
    remarkOnSegment(list, known, placed, index)
    remarkOnDistalTime(list, known, placed, index)
  }
  for (const result of assessed.results) if (result.quantity === 'velocityMps' || result.quantity === 'segmentVelocityMps') remarkOnVelocity(list, result, known)
  remarkOnElbow(list, known, rows)
}

function remarkOnSegment(list: RemarkList, known: KnownRun, { row, site, label }: PlacedRow, index: number): void {
  const distance = row.values.distanceMm
  if (typeof distance !== 'number' || !site?.segmentMm) return
  const { usualMin, usualMax, possibleMin, possibleMax } = site.segmentMm
  if (distance < possibleMin || distance > possibleMax) return
  const isSegment = known.technique?.kind === 'motor' && index > 0
  if (isSegment && distance < SHORT_SEGMENT_MM) {
    const hint = centimetres(distance, site.segmentMm)
    if (!isShort(known)) addRemark(list, { runId: known.run.id, rowId: row.id, quantity: 'distanceMm', code: 'short-segment', strength: 'check', sentence: `The segment to ${label} is ${distance} mm, under ${SHORT_SEGMENT_MM} mm: a small slip of the tape changes the velocity much. Declare a short-segment study or measure again.${hint}`, source: 'Maynard and Stolov 1972, from memory (about 100 mm); Landau et al. 2003, from memory (60 mm)' })
    return
  }
  if (distance >= usualMin && distance <= usualMax) return
  addRemark(list, { runId: known.run.id, rowId: row.id, quantity: 'distanceMm', code: 'distance-unusual', strength: 'check', source: OWN_DECISION, sentence: `Distance at ${label} is usually between ${usualMin} and ${usualMax} mm in adults; ${distance} was entered.${centimetres(distance, site.segmentMm)}` })
}

const centimetres = (distance: number, { usualMin, usualMax }: { usualMin: number, usualMax: number }) =>
  distance * 10 >= usualMin && distance * 10 <= usualMax ? ' Were centimetres entered? Enter millimetres.' : ''
function isShortStep(known: KnownRun, rowId: string | undefined): boolean {
  const distance = known.rows.find(({ row }) => row.id === rowId)?.row.values.distanceMm
  return isShort(known) && typeof distance === 'number' && distance < SHORT_SEGMENT_MM
}
const isShort = ({ run, technique }: KnownRun) => run.shortSegments === true || technique?.shortSegments === true

/** Faster than a nerve carries, even without the time in the muscle: a latency far too short for its distance. */
function remarkOnDistalTime(list: RemarkList, known: KnownRun, { row, label }: PlacedRow, index: number): void {
  const [distance, latency] = [row.values.distanceMm, row.values.latencyMs]
  if (index > 0 || known.technique?.kind !== 'motor' || typeof distance !== 'number' || typeof latency !== 'number' || latency <= 0) return
  if (distance / latency <= 80) return
  addRemark(list, { code: 'latency-too-short', strength: 'check', runId: known.run.id, rowId: row.id, quantity: 'latencyMs', source: OWN_DECISION, sentence: `${latency} ms at ${label} is shorter than the nerve alone would take over ${distance} mm: check the cursor, the distance and stimulus spread.` })
}

function remarkOnVelocity(list: RemarkList, result: Result, known: KnownRun): void {
  const velocity = numberOf(result.value)
  const { possible, usual } = quantityOf('velocityMps')
  // Over 20 mm a tenth of a millisecond moves the velocity by half: the step itself is what is looked at.
  if (velocity === null || !possible || !usual || isShortStep(known, result.rowId)) return
  const isImpossible = velocity < possible.min || velocity > possible.max
  const max = result.at === 'leg' ? LEG_SEGMENT_MPS : usual.max
  if (!isImpossible && velocity >= usual.min && velocity <= max) return
  const [code, strength, words] = isImpossible
    ? ['velocity-impossible', 'stop', `; nerves carry between ${possible.min} and ${possible.max} m/s. Check the distance and both latencies.`] as const
    : ['velocity-unusual', 'check', `, usually between ${usual.min} and ${max} m/s. Check the distance, the cursors, cathode and anode.`] as const
  addRemark(list, {
    runId: result.runId, rowId: result.rowId, quantity: result.quantity, code, strength, source: OWN_DECISION,
    sentence: `${capital(result.label)} comes to ${roundForPrint(velocity, velocity < 10 ? 1 : 0)} m/s${words}`,
  })
}

const ELBOW_SOURCE = 'AAEM/AAN/AAPMR practice parameter, Campbell et al., Muscle Nerve 1999;22:408-411: 70 to 90°, from memory'

/** Skin and nerve move differently when the elbow bends: the position belongs to the distance. */
function remarkOnElbow(list: RemarkList, known: KnownRun, rows: readonly PlacedRow[]): void {
  const across = rows.find(placed => placed.site?.segment?.id === 'across-elbow' && typeof placed.row.values.latencyMs === 'number')
  if (!across || known.technique?.kind !== 'motor') return
  const angle = known.run.elbowFlexionDegrees
  if (angle !== undefined && angle >= 70 && angle <= 90) return
  addRemark(list, {
    runId: known.run.id, rowId: across.row.id, strength: 'note', source: ELBOW_SOURCE, code: angle === undefined ? 'elbow-position-missing' : 'elbow-position',
    sentence: angle === undefined ? 'Elbow position not recorded; bent by 70 to 90° is usual.' : `Elbow bent by ${angle}°; limits are usually for 70 to 90°.`,
  })
}
