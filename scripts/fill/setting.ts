import type { Database } from '#server/database/connection'
import { policyOf } from '#server/database/queries/policy'
import type { Organisation } from '#server/database/tables/organisation'
import type { Site } from '#server/database/tables/site'
import type { Policy } from '#shared/calculations/types'
import type { Role } from '#shared/permissions'

export interface Worker { id: string, name: string, printedName: string, credentials: string }
export interface Physician { id: string, practiceId: string, name: string, email: string, practiceName: string, town: string }
export interface Place {
  site: Site
  technologist: Worker
  reader: Worker
  administrator: Worker
  /** What the site judged by on a day. */
  policyOn: (day: string) => Policy
}
/** The clinic that is there: its sites with their people, and who refers to it. */
export interface Setting { organisation: Organisation, places: Place[], physicians: Physician[] }

async function workerAt(db: Database, siteId: string, role: Role): Promise<Worker> {
  const found = await db.selectFrom('roleHolding').innerJoin('user', 'user.id', 'roleHolding.userId').select(['user.id', 'name', 'printedName', 'credentials'])
    .where('siteId', '=', siteId).where('role', '=', role).where('endsOn', 'is', null).orderBy('user.name').executeTakeFirst()
  if (!found) throw new Error(`A site has no ${role}. Nothing was filled.`)
  return found
}

/** The days on which the sets in use at a site change: between two of them every study is judged alike. */
async function policies(db: Database, siteId: string): Promise<(day: string) => Policy> {
  const adoptions = await db.selectFrom('referenceAdoption').select(['effectiveOn', 'endedOn']).where('siteId', '=', siteId).execute()
  const days = [...new Set(['0000-01-01', ...adoptions.flatMap(({ effectiveOn, endedOn }) => endedOn ? [effectiveOn, endedOn] : [effectiveOn])])].sort()
  const known = await Promise.all(days.map(async day => ({ day, policy: await policyOf(db, { siteId, studyDate: day, excludedEntrapment: 0 }) })))
  return day => known.findLast(one => one.day <= day)!.policy
}

async function placeOf(db: Database, site: Site): Promise<Place> {
  const worker = (role: Role) => workerAt(db, site.id, role)
  return { site, technologist: await worker('technologist'), reader: await worker('neurologist'), administrator: await worker('administrator'), policyOn: await policies(db, site.id) }
}

/** @throws when the data folder is not a demonstration: nobody invents patients among real ones */
export async function readSetting(db: Database): Promise<Setting> {
  const organisation = await db.selectFrom('organisation').selectAll().executeTakeFirst()
  if (!organisation) throw new Error('The data folder has no clinic yet. Make the demonstration first: npm run seed:demo')
  if (organisation.demonstration !== 1) throw new Error('The data folder is not a demonstration. Nothing was filled.')
  const sites = await db.selectFrom('site').selectAll().where('closedAt', 'is', null).orderBy('name').execute()
  const physicians = await db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId')
    .select(['physician.id', 'practiceId', 'physician.name', 'email', 'practice.name as practiceName', 'practice.town']).where('leftOn', 'is', null).where('practice.closedAt', 'is', null).orderBy('physician.id').execute()
  if (sites.length === 0 || physicians.length === 0) throw new Error('The demonstration has no site or no physician. Nothing was filled.')
  return { organisation, places: await Promise.all(sites.map(site => placeOf(db, site))), physicians }
}
