import { randomUUID } from 'node:crypto'
import { sql } from 'kysely'
import { describe, expect, it } from 'vitest'
import { newestFirst, type NewestFirst } from '#server/database/queries/newest-first'
import { readingPage } from '#server/database/queries/reading'
import type { StudyState } from '#shared/states'
import { testContext } from './helpers'

const t = await testContext()
const sites = [(await t.makeSite()).id, (await t.makeSite()).id, (await t.makeSite()).id]
const readers = [(await t.makeUser()).id, (await t.makeUser()).id]
const states: StudyState[] = ['handed-over', 'read', 'stopped']
const STUDIES = 90

/** Several share their moment, so that the id decides. */
for (let n = 0; n < STUDIES; n++) {
  const siteId = sites[n % 3]!
  const referral = await t.makeReferral({ siteId, state: 'attended' })
  await t.db.insertInto('study').values({
    id: randomUUID(), number: `NCS-${n}`, referralId: referral.id, patientId: referral.patientId, siteId, state: states[n % 7 % 3]!, stateSince: new Date(Date.UTC(2026, 10, 1, n * 17 % 30)).toISOString(),
    studyDate: '2026-11-01', startedAt: null, handedOverAt: null, technologistId: null, readerId: [null, ...readers][n % 4 % 3] ?? null, takenAt: null, protocol: null, heightCm: null, weightKg: null, confirmationJson: null, returnRunId: null, policyJson: null, summaryJson: null, createdAt: '2026-11-01T00:00:00.000Z',
  }).execute()
}

/** The same by sorting everything. */
async function sorted({ siteIds, states: wanted }: Omit<NewestFirst, 'table'>, readerId?: string | null): Promise<string[]> {
  const rows = await t.db.selectFrom('study').select(['id', 'siteId', 'state', 'stateSince', 'readerId']).execute()
  return rows.filter(row => siteIds.includes(row.siteId) && wanted.includes(row.state) && (readerId === undefined || row.readerId === readerId))
    .sort((a, b) => a.stateSince < b.stateSince ? 1 : a.stateSince > b.stateSince ? -1 : a.id < b.id ? -1 : 1).map(row => row.id)
}

describe('the newest first', () => {
  it.each([
    ['one site, one state', { siteIds: sites.slice(0, 1), states: ['read'] }],
    ['all sites, one state', { siteIds: sites, states: ['read'] }],
    ['all sites, all states', { siteIds: sites, states }],
    ['more sites and states than can be merged', { siteIds: [...sites, ...Array.from({ length: 200 }, (_, n) => `none-${n}`)], states }],
  ])('is page by page what sorting everything gives: %s', async (_name, wish) => {
    const expected = await sorted(wish)
    expect(expected.length).toBeGreaterThan(5)
    const found: string[] = []
    for (let page = 1; page <= 20; page++) found.push(...await newestFirst(t.db, { table: 'study', ...wish }, { page, pageSize: 7 }))
    expect(found).toEqual(expected)
  })
  it('takes a further condition', async () => {
    const wish = { siteIds: sites, states }
    expect(await newestFirst(t.db, { table: 'study', ...wish, also: sql`reader_id IS ${readers[0]}` }, { page: 1, pageSize: 200 })).toEqual(await sorted(wish, readers[0]))
  })
  it('is empty where nothing is asked for', async () => {
    expect(await newestFirst(t.db, { table: 'study', siteIds: [], states }, { page: 1, pageSize: 7 })).toEqual([])
    expect(await newestFirst(t.db, { table: 'study', siteIds: sites, states: [] }, { page: 1, pageSize: 7 })).toEqual([])
  })
})

describe('the list of read studies', () => {
  it.each([['of everybody', undefined], ['of one reader', readers[1]], ['of nobody', null]])('%s is counted and paged', async (_name, readerId) => {
    const expected = await sorted({ siteIds: sites, states: ['read'] }, readerId)
    const pages = await Promise.all([1, 2, 3, 4, 5].map(page => readingPage(t.db, { siteIds: sites, states: ['read'], ...(readerId !== undefined && { readerIds: readerId === null ? null : [readerId!] }) }, { page, pageSize: 10 })))
    expect(pages.flatMap(page => page.rows.map(row => row.studyId))).toEqual(expected)
    expect(pages[0]!.total).toBe(expected.length)
  })
})
