import type { AdoptedSet, Policy } from '#shared/calculations/types'
import { defaultPolicy } from '#shared/calculations/types'
import type { Database } from '../connection'
import type { Study } from '../tables/study'
import { policyInForce } from './policies'

/**
 * What a study is judged by: the temperatures, uncertainties, patterns and sets in use at its site on its day; once it is
 * signed, what it was signed with. So a policy that is approved today leaves what was recorded before as it was.
 */
export async function policyOf(db: Database, study: Pick<Study, 'siteId' | 'studyDate' | 'excludedEntrapment'> & Partial<Pick<Study, 'policyJson'>>): Promise<Policy> {
  if (study.policyJson) return JSON.parse(study.policyJson) as Policy
  const patterns = await policyInForce(db, 'patterns', study.siteId, study.studyDate)
  return {
    ...defaultPolicy, ...await measuresOf(db, study.siteId, study.studyDate), patternsOn: patterns.body.on, patternsOff: patterns.body.off,
    leaveOutEntrapmentSites: study.excludedEntrapment === 1, adopted: await adoptedSets(db, study.siteId, study.studyDate),
  }
}

export type Measures = Pick<Policy, 'handMinimumC' | 'footMinimumC' | 'distanceUncertaintyMm' | 'latencyUncertaintyMs' | 'temperatureCorrection'>

/** Temperatures and uncertainties of a site on a day. */
export async function measuresOf(db: Database, siteId: string, day: string): Promise<Measures> {
  const { body: warmth } = await policyInForce(db, 'temperature', siteId, day)
  const { body: doubt } = await policyInForce(db, 'uncertainty', siteId, day)
  return {
    handMinimumC: warmth.handMinimumC, footMinimumC: warmth.footMinimumC, temperatureCorrection: warmth.correctionShown,
    distanceUncertaintyMm: doubt.distanceMm, latencyUncertaintyMs: doubt.latencyMs,
  }
}

/** Approved by a second person, in force on the day and not yet ended; in the order in which the site asks them. */
export async function adoptedSets(db: Database, siteId: string, day: string): Promise<AdoptedSet[]> {
  const adoptions = await db.selectFrom('referenceAdoption').innerJoin('user', 'user.id', 'referenceAdoption.approvedBy')
    .select(['setId', 'setVersion', 'techniquesJson', 'effectiveOn', 'user.name as approver'])
    .where('siteId', '=', siteId).where('effectiveOn', '<=', day).where(eb => eb.or([eb('endedOn', 'is', null), eb('endedOn', '>', day)]))
    .orderBy('position').orderBy('effectiveOn').orderBy('referenceAdoption.id').execute()
  const checks = await db.selectFrom('rowCheck').select(['setId', 'setVersion', 'rowId']).where('setId', 'in', adoptions.map(adoption => adoption.setId)).orderBy('rowId').execute()
  return adoptions.map(adoption => ({
    setId: adoption.setId, version: adoption.setVersion, adoptedOn: adoption.effectiveOn, adoptedBy: adoption.approver,
    ...(adoption.techniquesJson ? { techniques: JSON.parse(adoption.techniquesJson) as string[] } : {}),
    verifiedRows: checks.filter(check => check.setId === adoption.setId && check.setVersion === adoption.setVersion).map(check => check.rowId),
  }))
}
