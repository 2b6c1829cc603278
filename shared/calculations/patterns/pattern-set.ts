import type { Side } from '../../schemas/common'
import type { Facts } from './facts'
import type { Basis, Criterion, CriterionText, Truth } from './finding'

/** What a set came to for one side, or for the whole study. */
export interface Assessed {
  outcome: { met: Truth, label: string }
  criteria: Criterion[]
  runIds: readonly string[]
}

/**
 * One published set of criteria as data: its words, what they rest on, and the small rules that decide them.
 * Ids never change; a set whose answer could come out differently is a new version.
 */
export interface PatternSet {
  id: string
  version: number
  title: string
  /** Citation with DOI, and what in it rests on what. */
  source: string
  /** 'memory': off until the medical director turns it on. */
  basis: Basis
  /** side: one result per side. study: one for the whole study. */
  scope: 'side' | 'study'
  /** Words of every criterion it may show. */
  criteria: readonly CriterionText[]
  /** Null when nothing of it was studied: then it is left out. */
  assess: (facts: Facts, side: Side) => Assessed | null
}

/** The setting that leaves out entrapment sites, shown where it changes the answer. */
export const entrapmentText: CriterionText = {
  id: 'entrapment-sites', basis: 'read',
  text: 'Setting: common entrapment sites are left out (median at the wrist, ulnar at the elbow and wrist, fibular at the head). Experts disagree: Arends et al. 2022, doi:10.1111/jns.12504',
}

/** How the setting stands. */
export function entrapmentCriterion(facts: Facts): Criterion {
  const on = facts.input.policy.leaveOutEntrapmentSites
  return { id: entrapmentText.id, text: entrapmentText.text, basis: entrapmentText.basis, result: on ? 'met' : 'not-met', numbers: on ? 'on' : 'off' }
}

/** Ids, each once. */
export const eachOnce = (ids: readonly (string | undefined)[]): string[] => [...new Set(ids.filter(id => id !== undefined))]
