import type { Side } from '../../schemas/common'
import type { Run, RunRow } from '../../schemas/study'
import { numberOf } from '../computed-value'
import { keepsFalling } from '../decrement'
import { readingOfResult, type Facts, type RunFacts } from './facts'
import { anyOf, atLeast, criterion, joined, notAssessable, passes, printBeside, type Bar, type Criterion, type CriterionText, type Finding, type Truth } from './finding'
import { eachOnce, type Assessed, type PatternSet } from './pattern-set'

export const repetitiveTechniques = ['repetitive-ulnar-adm', 'repetitive-facial-nasalis', 'repetitive-accessory-trapezius'] as const

const abnormal: Bar = { op: 'above', value: 10 }
const equivocal: Bar = { op: 'at-least', value: 5 }
/** Hz. */
const slowRate = { from: 2, to: 5 }
/** Seconds after exercise: the repair is looked for at once, the exhaustion later. */
const REPAIR_UNTIL = 30
const EXHAUSTION_FROM = 60

const texts = {
  train: { id: 'decrement', text: 'decrement from the first to the fourth response above 10 % (5 to 10 % equivocal), stimuli at 2 to 5 Hz', basis: 'read' },
  repeated: { id: 'repeated', text: 'above 10 % in more than one train', basis: 'read' },
  shape: { id: 'shape', text: 'Beside: the largest step is from the first to the second response, and the train levels off', basis: 'read' },
  repair: { id: 'repair', text: 'Beside: less decrement right after exercise than at rest', basis: 'read' },
  exhaustion: { id: 'exhaustion', text: 'Beside: more decrement one to four minutes after exercise than at rest', basis: 'read' },
} as const satisfies Record<string, CriterionText>

/** Decrement of slow trains in myasthenia, one result per side. */
export const myasthenicDecrement: PatternSet = {
  id: 'myasthenic-decrement', version: 1, title: 'Repetitive stimulation: decrement', basis: 'read', scope: 'side',
  source: 'Norwegian society for clinical neurophysiology, pages on myasthenia and slow stimulation; J Neurol Neurosurg Psychiatry review, table 3; 5 to 10 % equivocal: a teaching page (all read)',
  criteria: Object.values(texts),
  assess: assessDecrement,
}

/** One slow train with its decrement, or why it is not taken. */
interface Train { row: RunRow, label: string, percent: number, because: string }

function assessDecrement(facts: Facts, side: Side): Assessed | null {
  const runs = repetitiveTechniques.map(technique => facts.run(technique, side)).filter(run => run !== undefined && slowRows(run.recorded).length > 0) as RunFacts[]
  if (runs.length === 0) return null
  const judged = runs.map(run => ({ run, trains: trainsOf(facts, run) }))
  const criteria = judged.flatMap(({ run, trains }) => criteriaOf(run, trains))
  const met = anyOf(criteria.filter(({ id }) => id.endsWith('/repeated')).map(({ result }) => result))
  return { outcome: { met, label: labelOf(met, judged.flatMap(({ trains }) => trains)) }, criteria, runIds: eachOnce(runs.map(({ id }) => id)) }
}

const slowRows = (run: Run | undefined) => run?.rows.filter(row => row.site !== 'high-rate' && !isFast(row) && (row.series?.length ?? 0) > 0) ?? []
const isFast = ({ values }: RunRow) => typeof values.rateHz === 'number' && values.rateHz >= 10

function trainsOf(facts: Facts, run: RunFacts): Train[] {
  return slowRows(run.recorded).map((row): Train => {
    const result = run.assessment.results.find(one => one.rowId === row.id && one.quantity === 'decrementPercent')
    const label = (result?.label ?? row.site).replace(/^decrement, /, '')
    const percent = numberOf(result?.value)
    if (run.cold) return { row, label, percent: Number.NaN, because: run.cold }
    if (percent === null) return { row, label, percent: Number.NaN, because: readingOfResult(result).because }
    return { row, label, percent, because: doubtOf(row) }
  })
}

/** Why a decrement is not taken as one. */
function doubtOf(row: RunRow): string {
  const rate = row.values.rateHz
  if (typeof rate === 'number' && (rate < slowRate.from || rate > slowRate.to)) return `stimuli at ${rate} Hz, not 2 to 5 Hz`
  return keepsFalling(row.series ?? []) ? 'keeps falling to the last response: rather an artefact' : ''
}

function criteriaOf({ technique }: RunFacts, trains: readonly Train[]): Criterion[] {
  const of = (text: CriterionText, finding: Finding, end = text.id): Criterion => criterion({ ...text, id: `${technique.id}/${end}`, text: `${technique.recording.short}: ${text.text}` }, finding)
  const findings = trains.map(train => ({ train, finding: trainFinding(train) }))
  return [
    ...findings.map(({ train, finding }) => of({ ...texts.train, text: `${train.label}: ${texts.train.text}` }, finding, `${train.row.id}/decrement`)),
    of(texts.repeated, repeatedFinding(findings.map(({ finding }) => finding))),
    of(texts.shape, shapeFinding(trains)),
    of(texts.repair, againstRest(trains, seconds => seconds <= REPAIR_UNTIL, (after, rest) => after < rest)),
    of(texts.exhaustion, againstRest(trains, seconds => seconds >= EXHAUSTION_FROM, (after, rest) => after > rest)),
  ]
}

function trainFinding({ percent, because }: Train): Finding {
  if (Number.isNaN(percent)) return notAssessable(because)
  const isAbnormal = passes(percent, abnormal)
  const numbers = `${printBeside(percent, 1, abnormal)} %`
  if (because) return notAssessable(because, numbers)
  if (isAbnormal) return { result: 'met', numbers }
  return passes(percent, equivocal) ? { result: 'not-met', numbers, because: 'equivocal, 5 to 10 %' } : { result: 'not-met', numbers }
}

/** One train alone is not yet reproducible. */
function repeatedFinding(findings: readonly Finding[]): Finding {
  const result = atLeast(2, findings.map(one => one.result))
  const count = findings.filter(one => one.result === 'met').length
  const numbers = `${count} of ${findings.length} trains`
  if (result === 'met') return { result, numbers }
  if (result === 'not-assessable') return notAssessable(joined(findings.map(one => one.result === 'not-assessable' ? one.because : '')), numbers)
  return findings.length < 2 && count === 1 ? notAssessable('one train only', numbers) : { result, numbers }
}

function shapeFinding(trains: readonly Train[]): Finding {
  const falling = trains.filter(({ percent, because }) => !because && passes(percent, abnormal))
  if (falling.length === 0) return notAssessable('no train with a decrement above 10 %')
  const truths = falling.map(({ row }): Truth => isTypical(row.series ?? []) ? 'met' : 'not-met')
  return { result: truths.includes('not-met') ? 'not-met' : 'met', numbers: falling.map(({ label }) => label).join(', ') }
}

/** First step the largest, last step no further fall beyond it. */
function isTypical(series: readonly unknown[]): boolean {
  const numbers = series.filter((entry): entry is number => typeof entry === 'number')
  const steps = numbers.slice(1).map((amplitude, place) => (numbers[place] as number) - amplitude)
  const [first = 0, ...rest] = steps
  return first > 0 && rest.every(step => step <= first + 1e-9)
}

function againstRest(trains: readonly Train[], isTime: (seconds: number) => boolean, compare: (after: number, rest: number) => boolean): Finding {
  const rest = trains.find(({ row, because }) => row.site === 'rest' && !because)
  const after = trains.filter(({ row, because }) => row.site !== 'rest' && !because && typeof row.values.secondsAfterExercise === 'number' && isTime(row.values.secondsAfterExercise))
  if (!rest || after.length === 0) return notAssessable(rest ? 'no train at that time' : 'no train at rest')
  const numbers = [rest, ...after].map(({ label, percent }) => `${label} ${printBeside(percent, 1, abnormal)} %`).join(', ')
  return { result: after.some(({ percent }) => compare(percent, rest.percent)) ? 'met' : 'not-met', numbers }
}

function labelOf(met: Truth, trains: readonly Train[]): string {
  const largest = Math.max(...trains.filter(({ because }) => !because).map(({ percent }) => percent))
  if (!Number.isFinite(largest)) return 'no train that could be assessed'
  const said = `largest decrement ${printBeside(largest, 1, abnormal)} %`
  if (met === 'met') return `${said}, in more than one train`
  return passes(largest, abnormal) ? `${said}, not repeated` : passes(largest, equivocal) ? `${said}, equivocal` : said
}
