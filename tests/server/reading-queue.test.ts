import { describe, expect, it } from 'vitest'
import { dispatchPage } from '#server/database/queries/deliveries'
import { readingPage, type ReadingQueue } from '#server/database/queries/reading'
import { releaseStudy, returnStudy, takeStudy } from '#server/services/take-study'
import { testContext } from './helpers'
import { readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
const page = { page: 1, pageSize: 50 }
const queue = async (wanted: Partial<ReadingQueue> = {}) => (await readingPage(t.db, { siteIds: [room.site.id], states: ['handed-over', 'returned'], ...wanted }, page)).rows

describe('the queue', () => {
  it('urgent first, then who has waited longest, with flags and reader', async () => {
    const first = await room.handedOver()
    t.clock.minutes(5)
    const second = await room.handedOver()
    t.clock.minutes(5)
    const urgent = await room.handedOver({ urgency: 'urgent', urgencyReason: 'Weakness grows by the day' })
    expect((await queue()).map(row => row.studyId)).toEqual([urgent, first, second])
    await takeStudy(room.reader, second)
    const acute = await room.handedOver({ urgency: 'same-week', urgencyReason: 'Acute palsy' })
    expect((await queue()).map(each => each.studyId)).toEqual([acute, urgent, first, second])
    await t.db.updateTable('study').set({ state: 'entered-in-error' }).where('id', '=', acute).execute()
    const row = (await queue()).find(each => each.studyId === second)
    expect(row).toMatchObject({ flagged: 6, readerName: 'Rea Sample', hasDraft: false, state: 'handed-over' })
    expect((await queue({ readerIds: [room.reader.actor.userId!] })).map(each => each.studyId)).toEqual([second])
    expect((await queue({ readerIds: null })).map(each => each.studyId)).toEqual([urgent, first])
    await expect(releaseStudy(room.other, second)).rejects.toMatchObject({ code: 'wrong-state' })
    await releaseStudy(room.reader, second)
    expect(await queue({ readerIds: null })).toHaveLength(3)
  })
  it('shows nothing of other sites', async () => {
    expect(await queue({ siteIds: [] })).toEqual([])
    expect(await queue({ siteIds: [(await t.makeSite()).id] })).toEqual([])
  })
  it('a return keeps its question, about a run of the study only', async () => {
    const id = await room.handedOver()
    const other = await room.handedOver()
    const foreign = (await room.study(other)).study.runs[0]!.id
    await expect(returnStudy(room.reader, { id, question: 'Warm?', runId: foreign })).rejects.toMatchObject({ code: 'not-valid' })
    const own = (await room.study(id)).study.runs[0]!.id
    await returnStudy(room.reader, { id, question: 'Warm?', runId: own })
    expect((await room.study(id)).record).toMatchObject({ state: 'returned', returnQuestion: 'Warm?', returnRunId: own })
    expect((await queue()).find(row => row.studyId === id)?.state).toBe('returned')
    await expect(returnStudy(room.reader, { id, question: 'Again?', runId: null })).rejects.toMatchObject({ code: 'wrong-state' })
  })
})

describe('dispatch', () => {
  it('lists deliveries of the sites with the counts of each state', async () => {
    await room.signed()
    const all = await dispatchPage(t.db, { siteIds: [room.site.id] }, page)
    expect(all.counts).toEqual({ held: 1 })
    expect(all.rows[0]).toMatchObject({ state: 'held', version: 1, status: 'final', method: 'encrypted-pdf', siteName: room.site.name })
    expect(all.rows[0]?.messageId).toMatch(/^<.+@orthodrome\.example>$/)
    expect((await dispatchPage(t.db, { siteIds: [room.site.id], state: 'sent' }, page))).toMatchObject({ rows: [], total: 0, counts: { held: 1 } })
    expect((await dispatchPage(t.db, { siteIds: [] }, page))).toMatchObject({ rows: [], total: 0, counts: {} })
  })
})
