import type { ReferenceTable } from '../schemas/reference-table'
import { findLimit, type FoundLimit, type LimitPerson, type LimitQuery } from './find-limit'
import type { Policy } from './types'

/** How a run was recorded, as far as limits depend on it. */
export type Recorded = Pick<LimitQuery, 'technique' | 'direction' | 'amplitudeDefinition' | 'distanceMm'>

/** Answers the questions about one way of recording; each is asked of the sets once. */
export interface LimitAsker { ask: (quantity: string, at: string | null) => FoundLimit }
export type AskerFor = (recorded: Recorded) => LimitAsker

/**
 * Limits of one person at one site stay the same while the study is typed, so the answers are kept between assessments:
 * for the same person's age, sex, height and BMI, the same adopted sets and the same tables (which are frozen once
 * loaded). What is kept are numbers of the sets; nothing says whose they are.
 */
const KEPT = 8
interface Shelf { key: string, tables: readonly ReferenceTable[], /** by technique */ askers: Map<string, KnownAsker[]>, count: number }
interface KnownAsker extends LimitAsker { recorded: Recorded }
let shelves: Shelf[] = []

/**
 * The function that finds limits for one person; both sides and every later keystroke share its answers.
 *
 * @example
 * askerFor(tables, policy, person)({ technique: 'sural', direction: 'antidromic', amplitudeDefinition: 'baseline-to-peak', distanceMm: 140 }).ask('amplitudeUv', 'calf')
 */
export function askerFor(tables: readonly ReferenceTable[], policy: Policy, person: LimitPerson): AskerFor {
  const shelf = shelfFor(tables, policy, person)
  return (recorded) => {
    const known = shelf.askers.get(recorded.technique) ?? []
    for (const asker of known) if (isSameWay(asker.recorded, recorded)) return asker
    const asker = newAsker({ tables, policy: { adopted: policy.adopted.map(one => ({ ...one })) } }, recorded, person)
    shelf.askers.set(recorded.technique, [...known, asker])
    shelf.count += 1
    return asker
  }
}

const isSameWay = (one: Recorded, other: Recorded) =>
  one.distanceMm === other.distanceMm && one.direction === other.direction && one.amplitudeDefinition === other.amplitudeDefinition

function shelfFor(tables: readonly ReferenceTable[], policy: Policy, person: LimitPerson): Shelf {
  const key = `${person.ageYears}|${person.sexForLimits}|${person.heightCm}|${person.bmi}|${JSON.stringify(policy.adopted)}`
  const known = shelves.find(shelf => shelf.key === key && shelf.tables.length === tables.length && shelf.tables.every((table, index) => table === tables[index]))
  // A study with very many distances must not fill the memory.
  if (known && known.count < 2000) return known
  const shelf: Shelf = { key, tables: [...tables], askers: new Map(), count: 0 }
  shelves = [shelf, ...shelves.filter(one => one !== known)].slice(0, KEPT)
  return shelf
}

function newAsker(shelf: { tables: readonly ReferenceTable[], policy: Pick<Policy, 'adopted'> }, recorded: Recorded, person: LimitPerson): KnownAsker {
  const answers = new Map<string, Map<string | null, FoundLimit>>()
  return {
    recorded,
    ask: (quantity, at) => {
      let byPlace = answers.get(quantity)
      if (!byPlace) answers.set(quantity, byPlace = new Map())
      let answer = byPlace.get(at)
      if (!answer) byPlace.set(at, answer = frozen(findLimit(shelf, { ...recorded, quantity, at, person })))
      return answer
    },
  }
}

/** Shared between assessments, so nobody may change it. */
function frozen(answer: FoundLimit): FoundLimit {
  if (answer.kind === 'limits') {
    if (answer.upper) Object.freeze(answer.upper)
    if (answer.lower) Object.freeze(answer.lower)
  }
  return Object.freeze(answer)
}
