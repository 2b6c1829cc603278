import { percentOfOwnLimit, shareOf } from './criteria'
import type { Facts } from './facts'
import { allOf, anyOf, atLeast, criterion, joined, notAssessable, notTruth, passes, type Criterion, type CriterionText, type Finding, type Truth } from './finding'
import { isAbnormal, isLow, isSilent, sensoryNervesOf, type SensoryNerve } from './sensory-nerves'

/** Sensory criteria that stand beside the motor ones: the pair of percentages and the sural pattern were read as of 2010. */
const texts = {
  velocity: { id: 'sensory-velocity', text: 'Beside: sensory velocity below 80 % of the lower limit (below 70 % when the amplitude is below 80 % of its lower limit) in two nerves', basis: 'read' },
  suralSparing: { id: 'sural-sparing', text: 'Beside: median or radial response low or absent while the sural response is within its limit (the median not counted if from carpal tunnel syndrome)', basis: 'read' },
} as const satisfies Record<string, CriterionText>
export const sensoryTexts: readonly CriterionText[] = Object.values(texts)

const studied = ['median', 'ulnar', 'superficial-radial', 'sural']
export const sensoryOf = (facts: Facts): SensoryNerve[] => sensoryNervesOf(facts).filter(({ nerve }) => studied.includes(nerve))
export const sensoryRunIds = (facts: Facts): string[] => sensoryOf(facts).map(({ run }) => run.id)

/** The two sensory criteria; none where no sensory nerve was studied. */
export function sensorySupport(facts: Facts): Criterion[] {
  const nerves = sensoryOf(facts)
  if (nerves.length === 0) return []
  return [criterion(texts.velocity, slowInTwo(facts, nerves)), criterion(texts.suralSparing, suralSparing(facts, nerves))]
}

function slowInTwo(facts: Facts, nerves: readonly SensoryNerve[]): Finding {
  const findings = nerves.filter(nerve => !isSilent(nerve)).map(nerve => ({ nerve, finding: slowBySharesOf(facts, nerve) }))
  if (findings.length < 2) return notAssessable('fewer than two sensory responses')
  return summed(findings, 2)
}

/** Two nerves or more: the names and numbers of all. */
export function summed(findings: readonly { nerve: SensoryNerve, finding: Finding }[], needed: number): Finding {
  const result = atLeast(needed, findings.map(({ finding }) => finding.result))
  const numbers = findings.filter(({ finding }) => finding.numbers).map(({ nerve, finding }) => `${nerve.name} ${finding.numbers}`).join('; ')
  const because = result === 'not-assessable' ? joined(findings.map(({ finding }) => finding.result === 'not-assessable' ? finding.because : '')) : ''
  return because ? { result, numbers, because } : { result, numbers }
}

function slowBySharesOf(facts: Facts, nerve: SensoryNerve): Finding {
  const amplitude = shareOf(facts, nerve.amplitude, 'lower')
  if (typeof amplitude === 'string') return notAssessable(`amplitude: ${amplitude}`)
  return percentOfOwnLimit(facts, nerve.velocity, 'lower', { op: 'below', value: passes(amplitude.percent, { op: 'below', value: 80 }) ? 70 : 80 })
}

/** Every sural response that was recorded has to be spared. */
function suralSparing(facts: Facts, nerves: readonly SensoryNerve[]): Finding {
  const arms = nerves.filter(({ nerve }) => nerve === 'median' || nerve === 'superficial-radial')
  const surals = nerves.filter(({ nerve }) => nerve === 'sural')
  if (arms.length === 0 || surals.length === 0) return notAssessable('sural and median or radial sensory responses not both recorded')
  const low = arms.map(nerve => ({ nerve, finding: armLow(facts, nerve) }))
  const spared = surals.map(nerve => ({ nerve, finding: isAbnormal(facts, nerve) }))
  const result: Truth = allOf([anyOf(low.map(one => one.finding.result)), allOf(spared.map(one => notTruth(one.finding.result)))])
  const numbers = [...low, ...spared].filter(({ finding }) => finding.numbers).map(({ nerve, finding }) => `${nerve.name} ${finding.numbers}`).join('; ')
  const because = result === 'not-assessable' ? joined([...low, ...spared].map(({ finding }) => finding.because)) : ''
  return because ? { result, numbers, because } : { result, numbers }
}

/** A low median response alone is left open, since carpal tunnel syndrome gives it too. */
function armLow(facts: Facts, nerve: SensoryNerve): Finding {
  const finding = isLow(facts, nerve)
  if (nerve.nerve !== 'median' || finding.result !== 'met') return finding
  const { leaveOutEntrapmentSites } = facts.input.policy
  return leaveOutEntrapmentSites
    ? { result: 'not-met', numbers: `${finding.numbers}, left out at the wrist` }
    : { result: 'not-assessable', numbers: finding.numbers, because: 'median: not counted if from carpal tunnel syndrome' }
}
