import { sql, type RawBuilder } from 'kysely'
import { nextStep } from '#shared/next-step'
import type { Page } from '#shared/schemas/common'
import type { Clocks } from '#shared/policies/clocks'
import { clockOfState, dueOf } from '#shared/referral-clocks'
import { missingForBooking, urgencies, type ReferralRow, type Urgency } from '#shared/schemas/referral'
import { referralStates, type ReferralState, type StudyState } from '#shared/states'
import type { Database } from '../connection'
import { toIdentify } from './desk-referrals'
import { cameBack } from './letters'
import { patientWords } from './patient-words'
import { referralInputOf } from './referrals'

export const referralSorts = ['stateSince', 'number', 'patient', 'urgency', 'state', 'site', 'booking'] as const
export interface ReferralListQuery {
  /** Sites the person may see; nothing outside them is ever counted or listed. */
  siteIds: readonly string[]
  states: readonly ReferralState[]
  urgency?: Urgency
  /** Only those of this person, past their clock, or with something that came back. */
  ownerId?: string
  overdue?: boolean
  cameBack?: boolean
  /** The organisation's clocks and the moment that they are read at. */
  clocks: Clocks
  now: Date
  search: string
  sort: (typeof referralSorts)[number]
  direction: 'asc' | 'desc'
  page: number
  pageSize: number
}
export type ReferralPage = Page<ReferralRow> & { counts: Record<ReferralState, number>, /** of those that are counted: past their clock, something came back */ overdue: number, cameBack: number }
interface Group { siteId: string, state: string, urgency: string, n: number }

/** Up to so many matching referrals are sorted as they are; more are read in the order of an index. */
const SORT_AT_MOST = 3000

/**
 * One page of the worklist. Counts come from a table kept by triggers and the page from an index, so that a year of
 * work and ten years of it take the same time (tests/server/referral-list.test.ts).
 */
export async function listReferrals(db: Database, query: ReferralListQuery): Promise<ReferralPage> {
  const groups = await db.selectFrom('referralCount').selectAll().where('siteId', 'in', query.siteIds).where('n', '>', 0)
    .$if(query.urgency !== undefined, counts => counts.where('urgency', '=', query.urgency ?? '')).execute()
  const wanted = query.states.length ? groups.filter(group => query.states.includes(group.state as ReferralState)) : groups
  const narrowed = query.ownerId !== undefined || query.overdue || query.cameBack
  const found = query.search.trim() !== '' ? await pageOfSearch(db, query) : narrowed ? await pageNarrowed(db, query) : await pageOfGroups(db, query, wanted)
  const counts = Object.fromEntries(referralStates.map(state => [state, sum(groups.filter(group => group.state === state))])) as Record<ReferralState, number>
  return { ...await marksOf(db, query), rows: await rowsOf(db, found.ids, query), total: found.total, page: query.page, pageSize: query.pageSize, counts }
}

const sum = (groups: Group[]) => groups.reduce((total, group) => total + group.n, 0)
const direction = (query: ReferralListQuery) => query.direction === 'desc' ? sql`DESC` : sql`ASC`
const urgencyRank = sql`CASE referral.urgency ${sql.join(urgencies.map((urgency, index) => sql`WHEN ${urgency} THEN ${index}`), sql` `)} END`
const stateRank = sql`CASE referral.state ${sql.join(referralStates.map((state, index) => sql`WHEN ${state} THEN ${index}`), sql` `)} END`

function orderOf(query: ReferralListQuery): RawBuilder<unknown> {
  const way = direction(query)
  const orders: Record<ReferralListQuery['sort'], RawBuilder<unknown>> = {
    stateSince: sql`referral.state_since ${way}, referral.id ${way}`,
    number: sql`referral.number ${way}`,
    patient: sql`patient.family_name ${way}, patient.given_name ${way}, referral.number ${way}`,
    urgency: sql`${urgencyRank} ${way}, referral.state_since ASC, referral.id`,
    state: sql`${stateRank} ${way}, referral.state_since ASC, referral.id`,
    site: sql`site.name ${way}, referral.state_since ASC, referral.id`,
    booking: sql`referral.booking_starts_at ${way} NULLS LAST, referral.number ${way}`,
  }
  return orders[query.sort]
}

const limitOf = (query: ReferralListQuery) => sql`LIMIT ${query.pageSize} OFFSET ${(query.page - 1) * query.pageSize}`
const inList = (values: readonly string[]) => sql`(${sql.join(values.map(value => sql`${value}`))})`

/** `plus` is SQLite's way of saying "not by an index of this column": where the order or a search finds the rows. */
function filterOf(query: ReferralListQuery, plus: RawBuilder<unknown>): RawBuilder<unknown> {
  const states = (query.states.length ? query.states : referralStates).filter(state => !query.overdue || clockOfState[state])
  const wanted = query.urgency ? [query.urgency] : urgencies
  return sql`${plus}referral.site_id IN ${inList(query.siteIds)} AND ${plus}referral.state IN ${inList(states)} AND ${plus}referral.urgency IN ${inList(wanted)}${alsoOf(query)}`
}

/** Past its clock: one condition for each state and urgency that has one. */
function overdueOf({ clocks, now }: ReferralListQuery): RawBuilder<unknown> {
  const parts = referralStates.flatMap((state) => {
    const clock = clockOfState[state]
    return clock ? urgencies.map(urgency => sql`(referral.state = ${state} AND referral.urgency = ${urgency} AND referral.state_since < ${new Date(now.getTime() - clocks[clock][urgency] * 3_600_000).toISOString()})`) : []
  })
  return sql`(${sql.join(parts, sql` OR `)})`
}

function alsoOf(query: ReferralListQuery): RawBuilder<unknown> {
  const owner = query.ownerId === undefined ? sql`` : sql` AND referral.owner_id = ${query.ownerId}`
  return sql`${owner}${query.overdue ? sql` AND ${overdueOf(query)}` : sql``}${query.cameBack ? sql` AND ${cameBack}` : sql``}`
}

/** A few of all: counted and sorted as they are. */
async function pageNarrowed(db: Database, query: ReferralListQuery): Promise<Found> {
  const filter = filterOf(query, sql``)
  const { rows: [counted] } = await sql<{ total: number }>`SELECT count(*) AS total FROM referral WHERE ${filter}`.execute(db)
  return { ids: idsOf(await select(query, fromReferral, filter).execute(db)), total: counted?.total ?? 0 }
}

/** How many of those the person may see are past their clock, and where something came back. */
async function marksOf(db: Database, query: ReferralListQuery): Promise<{ overdue: number, cameBack: number }> {
  const all = { ...query, states: [], ownerId: undefined, cameBack: false }
  const { rows: [late] } = await sql<{ n: number }>`SELECT count(*) AS n FROM referral WHERE ${filterOf({ ...all, overdue: true }, sql``)}`.execute(db)
  const { rows: [back] } = await sql<{ n: number }>`SELECT count(DISTINCT referral.id) AS n FROM referrer_letter CROSS JOIN referral ON referral.id = referrer_letter.referral_id WHERE referrer_letter.closed_because = 'answered' AND referrer_letter.seen_at IS NULL AND ${filterOf({ ...all, overdue: false }, sql`+`)}`.execute(db)
  return { overdue: late?.n ?? 0, cameBack: back?.n ?? 0 }
}

const fromReferral = sql`FROM referral CROSS JOIN patient ON patient.id = referral.patient_id CROSS JOIN site ON site.id = referral.site_id`
const fromPatient = sql`FROM patient CROSS JOIN referral ON referral.patient_id = patient.id CROSS JOIN site ON site.id = referral.site_id`

function select(query: ReferralListQuery, from: RawBuilder<unknown>, filter: RawBuilder<unknown>): RawBuilder<{ id: string }> {
  return sql`SELECT referral.id ${from} WHERE ${filter} ORDER BY ${orderOf(query)} ${limitOf(query)}`
}

interface Found { ids: string[], total: number }
const idsOf = (result: { rows: { id: string }[] }) => result.rows.map(row => row.id)

/** Few rows are fetched and sorted; many are read in order: by the index of names or numbers, or group by group. */
async function pageOfGroups(db: Database, query: ReferralListQuery, groups: Group[]): Promise<Found> {
  const total = sum(groups)
  if (total === 0) return { ids: [], total }
  if (total <= SORT_AT_MOST || groups.length > 400) return { ids: idsOf(await select(query, fromReferral, filterOf(query, sql``)).execute(db)), total }
  if (query.sort === 'patient') return { ids: idsOf(await select(query, fromPatient, filterOf(query, sql`+`)).execute(db)), total }
  if (query.sort === 'number' || query.sort === 'booking') return { ids: idsOf(await select(query, fromReferral, filterOf(query, sql`+`)).execute(db)), total }
  return { ids: await idsOfParts(db, query, await partsOf(db, query, groups)), total }
}

/** The groups in the order of the list: those of one part stand together and are ordered by how long they wait. */
async function partsOf(db: Database, query: ReferralListQuery, groups: Group[]): Promise<Group[][]> {
  const orders = {
    urgency: async (group: Group) => urgencies.indexOf(group.urgency as Urgency),
    state: async (group: Group) => referralStates.indexOf(group.state as ReferralState),
    site: async (group: Group) => (await siteOrder(db)).indexOf(group.siteId),
  }
  if (query.sort !== 'urgency' && query.sort !== 'state' && query.sort !== 'site') return [groups]
  const ranks = await Promise.all(groups.map(orders[query.sort]))
  const parts = [...new Set(ranks)].toSorted((a, b) => query.direction === 'desc' ? b - a : a - b)
  return parts.map(rank => groups.filter((_, index) => ranks[index] === rank))
}

async function siteOrder(db: Database): Promise<string[]> {
  return (await db.selectFrom('site').select('id').orderBy('name').execute()).map(site => site.id)
}

/** Counts are known, so whole parts are stepped over without reading them. */
async function idsOfParts(db: Database, query: ReferralListQuery, parts: Group[][]): Promise<string[]> {
  const ids: string[] = []
  let skip = (query.page - 1) * query.pageSize
  const way = query.sort === 'stateSince' ? direction(query) : sql`ASC`
  for (const part of parts) {
    const wanted = Math.min(query.pageSize - ids.length, sum(part) - skip)
    if (wanted > 0) ids.push(...idsOf(await mergedGroups(part, way, wanted, skip).execute(db)))
    skip = Math.max(0, skip - sum(part))
    if (ids.length >= query.pageSize) break
  }
  return ids
}

/** Each site, state and urgency is one range of an index, already in order; the ranges are merged and only the page is read. */
function mergedGroups(groups: Group[], way: RawBuilder<unknown>, limit: number, offset: number): RawBuilder<{ id: string }> {
  const parts = groups.map(({ siteId, state, urgency }) => sql`SELECT id, state_since AS since FROM referral WHERE site_id = ${siteId} AND state = ${state} AND urgency = ${urgency}`)
  return sql`${sql.join(parts, sql` UNION ALL `)} ORDER BY since ${way}, id ${way} LIMIT ${limit} OFFSET ${offset}`
}

/** By patient (name, number, birth date) or by the beginning of the referral's number. */
async function pageOfSearch(db: Database, query: ReferralListQuery): Promise<Found> {
  const { match, birthDates } = patientWords(query.search)
  const conditions = [
    ...(match ? [sql`patient.id IN (SELECT patient_id FROM patient_search WHERE patient_search MATCH ${match})`] : []),
    ...(birthDates.length ? [sql`patient.birth_date IN ${inList(birthDates)}`] : []),
  ]
  const number = query.search.trim().toUpperCase()
  const byNumber = /^REF-/.test(number)
  const from = byNumber ? fromReferral : fromPatient
  const found = byNumber ? sql`referral.number >= ${number} AND referral.number < ${`${number}\uFFFF`}` : conditions.length ? sql.join(conditions, sql` AND `) : sql`0`
  const filter = sql`${found} AND ${filterOf(query, sql`+`)}`
  const { rows: [counted] } = await sql<{ total: number }>`SELECT count(*) AS total ${from} WHERE ${filter}`.execute(db)
  return { ids: idsOf(await select(query, from, filter).execute(db)), total: counted?.total ?? 0 }
}

async function rowsOf(db: Database, ids: string[], { clocks, now }: Pick<ReferralListQuery, 'clocks' | 'now'>): Promise<ReferralRow[]> {
  const rows = await db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').innerJoin('site', 'site.id', 'referral.siteId').leftJoin('physician', 'physician.id', 'referral.physicianId').leftJoin('user as owner', 'owner.id', 'referral.ownerId')
    .selectAll('referral').select(['familyName', 'givenName', 'birthDate', 'recordNumber', 'site.name as siteName', 'physician.name as physicianName', 'owner.name as ownerName'])
    .select([
      cameBack.as('cameBack'),
      toIdentify.as('toIdentify'),
      sql<string | null>`(SELECT id FROM study WHERE study.referral_id = referral.id AND study.state <> 'entered-in-error' ORDER BY created_at DESC LIMIT 1)`.as('studyId'),
      sql<StudyState | null>`(SELECT state FROM study WHERE study.referral_id = referral.id AND study.state <> 'entered-in-error' ORDER BY created_at DESC LIMIT 1)`.as('studyState'),
    ])
    .where('referral.id', 'in', ids).execute()
  const byId = new Map(rows.map(row => [row.id, row]))
  return ids.flatMap(id => byId.get(id) ?? []).map(row => ({ ...row, cameBack: row.cameBack === 1, dueAt: dueOf(row, clocks) })).map(row => ({
    id: row.id, number: row.number, patientId: row.patientId, patientName: `${row.familyName}, ${row.givenName}`, birthDate: row.birthDate, recordNumber: row.recordNumber,
    siteId: row.siteId, siteName: row.siteName, physicianName: row.physicianName, state: row.state, stateSince: row.stateSince, urgency: row.urgency,
    clinicalQuestion: row.clinicalQuestion, side: row.side, studyId: row.studyId, bookingStartsAt: row.bookingStartsAt, ownerName: row.ownerName, cameBack: row.cameBack, dueAt: row.dueAt,
    nextStep: nextStep({ state: row.state, missing: missingForBooking(referralInputOf(row, [])), studyState: row.studyState, cameBack: row.cameBack, overdue: row.dueAt !== null && row.dueAt < now.toISOString(), identify: row.toIdentify === 1 }),
  }))
}
