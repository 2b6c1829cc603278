import type { AdoptedSet, Policy } from '#shared/calculations/types'
import { defaultPolicy } from '#shared/calculations/types'
import type { Database } from '../connection'
import type { Study } from '../tables/study'

/** What a study is judged by: its site's temperatures and uncertainties, and the sets in use there on its day; once it is signed, what it was signed with. */
export async function policyOf(db: Database, study: Pick<Study, 'siteId' | 'studyDate' | 'excludedEntrapment'> & Partial<Pick<Study, 'policyJson'>>): Promise<Policy> {
  if (study.policyJson) return JSON.parse(study.policyJson) as Policy
  const site = await db.selectFrom('site').select(['handMinimumC', 'footMinimumC', 'distanceUncertaintyMm', 'latencyUncertaintyMs']).where('id', '=', study.siteId).executeTakeFirstOrThrow()
  return { ...defaultPolicy, ...site, leaveOutEntrapmentSites: study.excludedEntrapment === 1, adopted: await adoptedSets(db, study.siteId, study.studyDate) }
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
