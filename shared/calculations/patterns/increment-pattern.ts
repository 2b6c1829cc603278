import type { Side } from '../../schemas/common'
import { beyondLimit } from './criteria'
import { repetitiveTechniques } from './decrement-pattern'
import { missing, readingOf, readingOfResult, usualSite, type Facts, type Reading, type RunFacts } from './facts'
import { anyOf, criterion, joined, notAssessable, passes, printBeside, type Bar, type Criterion, type CriterionText, type Finding } from './finding'
import { eachOnce, type Assessed, type PatternSet } from './pattern-set'

const sixty: Bar = { op: 'at-least', value: 60 }
const hundred: Bar = { op: 'at-least', value: 100 }
const fast: Bar = { op: 'above', value: 100 }

const texts = {
  sixty: { id: 'increment-60', text: 'increment after exercise at least 60 % (sensitivity 77.8 %, specificity 98.9 %)', basis: 'read' },
  hundred: { id: 'increment-100', text: 'increment after exercise at least 100 % (sensitivity 58.7 %, specificity 100 %)', basis: 'read' },
  fast: { id: 'increment-fast', text: 'Beside: increment within a fast train (20 to 50 Hz) above 100 %', basis: 'memory' },
  low: { id: 'low-amplitude', text: 'Beside: motor amplitude at rest below its limit', basis: 'read' },
} as const satisfies Record<string, CriterionText>

/** Increment after short exercise in Lambert-Eaton syndrome, one result per side. */
export const lambertEaton: PatternSet = {
  id: 'lambert-eaton-increment', version: 1, title: 'Repetitive stimulation: increment after exercise', basis: 'read', scope: 'side',
  source: 'Lipka AF et al., Muscle Nerve 2020, doi:10.1002/mus.26885 (63 patients, 93 others; read); fast trains from memory',
  criteria: Object.values(texts),
  assess: assessIncrement,
}

interface Increments { run: RunFacts, after: Reading, fast: Reading }

function assessIncrement(facts: Facts, side: Side): Assessed | null {
  const judged = repetitiveTechniques.map(technique => facts.run(technique, side)).filter(run => run !== undefined)
    .map(run => ({ run, after: largest(run, row => row !== 'high-rate'), fast: largest(run, row => row === 'high-rate') }))
    .filter(({ after, fast: fastTrain }) => after.result || fastTrain.result)
  if (judged.length === 0) return null
  const criteria = judged.flatMap(one => criteriaOf(facts, side, one))
  const met = anyOf(criteria.filter(({ id }) => id.endsWith(`/${texts.sixty.id}`)).map(({ result }) => result))
  return { outcome: { met, label: labelOf(judged) }, criteria, runIds: eachOnce(judged.map(({ run }) => run.id)) }
}

/** The largest of the increments at these rows; nothing of a cold run counts. */
function largest(run: RunFacts, isRow: (site: string | undefined) => boolean): Reading {
  const results = run.assessment.results.filter(result => result.quantity === 'incrementPercent' && isRow(result.at))
  if (results.length === 0) return missing('not recorded')
  if (run.cold) return { ...missing(run.cold), ...(results[0] && { result: results[0] }) }
  const readings = results.map(readingOfResult)
  const numbers = readings.filter(({ state }) => state === 'number').sort((a, b) => b.value - a.value)
  return numbers[0] ?? { ...missing(joined(readings.map(({ because }) => because))), ...(results[0] && { result: results[0] }) }
}

function criteriaOf(facts: Facts, side: Side, { run, after, fast: fastTrain }: Increments): Criterion[] {
  const of = (text: CriterionText, finding: Finding): Criterion => criterion({ ...text, id: `${run.technique.id}/${text.id}`, text: `${run.technique.recording.short}: ${text.text}` }, finding)
  return [
    of(texts.sixty, riseFinding(after, sixty)), of(texts.hundred, riseFinding(after, hundred)),
    of(texts.fast, riseFinding(fastTrain, fast)), of(texts.low, restFinding(facts, side, run)),
  ]
}

function riseFinding(reading: Reading, bar: Bar): Finding {
  if (reading.state !== 'number') return notAssessable(reading.because)
  return { result: passes(reading.value, bar) ? 'met' : 'not-met', numbers: `${printBeside(reading.value, 0, bar)} %${operands(reading)}` }
}

/** "from 1 mV to 1.6 mV": both operands, since some papers print the ratio instead. */
const operands = ({ result }: Reading) => result?.how ? `, ${result.how.formula}` : ''

/** The motor study of the same nerve and muscle, where there is one. */
function restFinding(facts: Facts, side: Side, { technique }: RunFacts): Finding {
  const motor = technique.id === 'repetitive-ulnar-adm' ? 'ulnar-motor-adm' : technique.id === 'repetitive-facial-nasalis' ? 'facial-motor-nasalis' : ''
  const run = motor ? facts.run(motor, side) : undefined
  return run ? beyondLimit(facts, readingOf(facts, run, 'amplitudeMv', usualSite(run.technique)), 'lower', true) : notAssessable('no motor study of the same muscle')
}

function labelOf(judged: readonly Increments[]): string {
  const numbers = judged.map(({ after }) => after).filter(({ state }) => state === 'number').map(({ value }) => value)
  if (numbers.length === 0) return 'no increment after exercise that could be computed'
  const most = Math.max(...numbers)
  const said = `increment ${printBeside(most, 0, passes(most, sixty) ? hundred : sixty)} %`
  return passes(most, hundred) ? `${said}, 100 % or more` : passes(most, sixty) ? `${said}, 60 % or more` : said
}
