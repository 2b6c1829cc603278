import { definiteIn, overPairs, probableIn, type PairRule } from './change-rules'
import type { Facts } from './facts'
import { allOf, anyOf, criterion, joined, notAssessable, notTruth, type CriterionText, type Finding, type Truth } from './finding'
import { motorNervesOf, type MotorNerve, type MotorRun } from './motor-nerves'
import { anyTruth, askEach, decideNerves, leftOut, metIn, nerveIs, unknown, type RuleTable } from './nerve-truths'
import { eachOnce, type Assessed, type PatternSet } from './pattern-set'
import { isAbnormal, sensoryNervesOf, type SensoryNerve } from './sensory-nerves'

const texts = {
  definite: { id: 'definite', text: 'Definite block outside entrapment sites in one nerve (median, ulnar, fibular): area fall at least 50 %, duration rise at most 30 %, distal amplitude above 1 mV and above 20 % of its lower limit', basis: 'read' },
  probable: { id: 'probable', text: 'At least probable block outside entrapment sites in one nerve: area fall at least 30 % over a long segment of the arm with a duration rise of at most 30 %, or area fall at least 50 %', basis: 'read' },
  sensory: { id: 'sensory', text: 'Sensory conduction of the same nerve within its limits (AAEM 2003; as part of the paper of 2010 from memory)', basis: 'read' },
  twoNerves: { id: 'definite-2003', text: 'Beside, AAEM 2003: definite block in two nerves outside entrapment sites', basis: 'read' },
  allSensory: { id: 'sensory-2003', text: 'Beside, AAEM 2003: sensory studies normal in all nerves tested, three at least', basis: 'read' },
} as const satisfies Record<string, CriterionText>

/** The electrical part of the criteria of multifocal motor neuropathy; the clinical part is not looked at. */
export const mmn2010: PatternSet = {
  id: 'mmn-efns-pns-2010', version: 1, title: 'Multifocal motor neuropathy, EFNS/PNS 2010, electrical part', basis: 'read', scope: 'study',
  source: 'EFNS/PNS guideline, J Peripher Nerv Syst 2010;15:295-301, doi:10.1111/j.1529-8027.2010.00290.x; beside it: Olney RK et al., Muscle Nerve 2003;27:117-121, doi:10.1002/mus.10317',
  criteria: Object.values(texts),
  assess: assessMmn,
}

const named = ['median', 'ulnar', 'fibular']
const hasSites = (nerve: MotorNerve) => nerve.runs.some(run => run.pairs.length > 0 || run.facts.cold !== '')

function assessMmn(facts: Facts): Assessed | null {
  const nerves = motorNervesOf(facts).filter(nerve => named.includes(nerve.nerve) && hasSites(nerve))
  if (nerves.length === 0) return null
  const definite = blockTable(nerves, run => definiteIn(facts, run))
  const probable = blockTable(nerves, (_run, nerve) => probableIn(nerve.nerve !== 'fibular'))
  const sensory = sensoryNervesOf(facts)
  const inOne = atLeastNerves(definite, nerves, 1)
  const atLeastProbable = atLeastNerves(probable, nerves, 1)
  const same = sensoryOfSame(facts, sensory, definite)
  const criteria = [
    criterion(texts.definite, inOne), criterion(texts.probable, atLeastProbable), criterion(texts.sensory, same),
    criterion(texts.twoNerves, atLeastNerves(definite, nerves, 2)), criterion(texts.allSensory, allSensoryNormal(facts, sensory)),
  ]
  const runIds = eachOnce([...nerves.flatMap(nerve => nerve.runs.map(run => run.facts.id)), ...sensory.map(({ run }) => run.id)])
  return { outcome: outcomeOf(inOne, atLeastProbable, same), criteria, runIds }
}

type BlockRule = (run: MotorRun, nerve: MotorNerve) => PairRule

/** The rule asked of every pair of sites that does not lie across an entrapment site. */
function blockTable(nerves: readonly MotorNerve[], ruleFor: BlockRule): RuleTable {
  return askEach(nerves, nerve => anyTruth(nerve.runs.map((run) => {
    if (run.facts.cold) return unknown(run.facts.cold)
    const pairs = run.pairs.filter(pair => !pair.entrapment)
    if (pairs.length === 0) return leftOut()
    const { result, numbers, because } = overPairs(pairs, ruleFor(run, nerve))
    return result === 'not-assessable' ? unknown(because ?? '') : nerveIs(result === 'met', numbers)
  })))
}

function atLeastNerves(table: RuleTable, nerves: readonly MotorNerve[], count: number): Finding {
  return decideNerves(table, count, holds => nerves.filter(nerve => holds(table, nerve)).length >= count)
}

/** Sensory nerve that belongs to each motor nerve. */
const sensoryFor: Record<string, string> = { median: 'median', ulnar: 'ulnar', fibular: 'superficial-fibular' }

function sensoryOfSame(facts: Facts, sensory: readonly SensoryNerve[], definite: RuleTable): Finding {
  const found = metIn(definite)
  if (found.length === 0) return notAssessable('no nerve with a definite block')
  const findings = found.map((nerve): Finding => {
    const same = sensory.find(one => one.nerve === sensoryFor[nerve.nerve] && one.side === nerve.side)
    if (!same) return notAssessable(`${nerve.name}: no sensory study`)
    const abnormal = isAbnormal(facts, same)
    return { ...abnormal, result: notTruth(abnormal.result), numbers: `${same.name} ${abnormal.numbers}` }
  })
  const result = anyOf(findings.map(one => one.result))
  return { result, numbers: joined(findings.map(one => one.numbers)), ...(result === 'not-assessable' && { because: joined(findings.map(one => one.because)) }) }
}

function allSensoryNormal(facts: Facts, sensory: readonly SensoryNerve[]): Finding {
  if (sensory.length < 3) return notAssessable(`${sensory.length} sensory ${sensory.length === 1 ? 'nerve' : 'nerves'} studied`)
  const findings = sensory.map(nerve => ({ nerve, finding: isAbnormal(facts, nerve) }))
  const result: Truth = allOf(findings.map(({ finding }) => notTruth(finding.result)))
  const abnormal = findings.filter(({ finding }) => finding.result === 'met').map(({ nerve }) => nerve.name)
  const numbers = abnormal.length > 0 ? `abnormal: ${abnormal.join(', ')}` : `${sensory.length} nerves`
  return { result, numbers, ...(result === 'not-assessable' && { because: joined(findings.map(({ finding }) => finding.because)) }) }
}

function outcomeOf(definite: Finding, probable: Finding, sensory: Finding): Assessed['outcome'] {
  const whole = allOf([definite.result, sensory.result])
  if (whole === 'met') return { met: 'met', label: 'definite block with normal sensory conduction' }
  if (definite.result === 'met') return { met: whole, label: sensory.result === 'not-met' ? 'definite block, sensory conduction abnormal' : 'definite block, sensory conduction not assessable' }
  if (definite.result === 'not-met') return { met: 'not-met', label: probable.result === 'met' ? 'at least probable block, none definite' : 'no definite block' }
  return { met: 'not-assessable', label: probable.result === 'met' ? 'at least probable block; definite not assessable' : 'no block in what could be assessed' }
}
