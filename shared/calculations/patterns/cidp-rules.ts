import type { Criterion, Finding } from './finding'
import type { MotorNerve } from './motor-nerves'
import { decideNerves, hasState, metIn, withOther, type Holds, type RuleTable } from './nerve-truths'

/** Parameters of demyelination, each asked of every nerve once. */
export interface Parameters {
  latency: RuleTable
  velocity: RuleTable
  fLatency: RuleTable
  fAbsent: RuleTable
  fall: RuleTable
  rise: RuleTable
  duration: RuleTable
}
export type ParameterId = keyof Parameters

/** Every parameter but an absent F-wave: what counts as "another parameter" beside one. */
const positive: readonly ParameterId[] = ['latency', 'velocity', 'fLatency', 'fall', 'rise', 'duration']

/** In how many nerves a parameter suffices alone, and in how many beside another parameter in another nerve. */
export interface ParameterRule { main: ParameterId, alone?: number, beside?: number }

/** One lettered rule of a set, over all nerves. */
export function decideParameter(parameters: Parameters, nerves: readonly MotorNerve[], { main, alone, beside }: ParameterRule): Finding {
  const table = parameters[main]
  const needed = Math.min(alone ?? Number.POSITIVE_INFINITY, beside ?? Number.POSITIVE_INFINITY)
  return decideNerves(table, needed, (holds) => {
    const isMain = (nerve: MotorNerve) => holds(table, nerve)
    if (alone !== undefined && nerves.filter(isMain).length >= alone) return true
    return beside !== undefined && withOther(nerves, beside, isMain, nerve => hasOther(parameters, nerve, main, holds))
  }, notRecorded[main])
}

/** Said where no nerve has a part in a rule. */
const notRecorded: Partial<Record<ParameterId, string>> = { fLatency: 'no F-waves recorded', fAbsent: 'no F-waves recorded', rise: 'durations not recorded', duration: 'durations not recorded' }

function hasOther(parameters: Parameters, nerve: MotorNerve, main: ParameterId, holds: Holds): boolean {
  return positive.some(id => id !== main && holds(parameters[id], nerve))
}

/**
 * Any parameter in one nerve. An absent F-wave alone is not taken as one: this project's reading, since F-waves are also
 * missing where the response is small and, in the fibular nerve, in health.
 */
export function decideOneNerve(parameters: Parameters): Finding {
  const tables = positive.map(id => parameters[id])
  const names = new Set(tables.flatMap(metIn).map(nerve => nerve.name))
  if (names.size > 0) return { result: 'met', numbers: [...names].join(', ') }
  if (tables.some(table => hasState(table, 'unknown')) || !tables.some(table => hasState(table, 'not-met'))) return { result: 'not-assessable', numbers: '', because: 'none in what could be assessed' }
  return { result: 'not-met', numbers: 'none' }
}

/** Ids of these criteria that are met: "a, b". */
export function idsMet(criteria: readonly Criterion[], ids: readonly string[]): string {
  return criteria.filter(one => ids.includes(one.id) && one.result === 'met').map(one => one.id).join(', ')
}
