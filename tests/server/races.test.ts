import { randomUUID } from 'node:crypto'
import { describe, expect, it } from 'vitest'
import { bookReferral } from '#server/services/book-referral'
import { acceptReferral, declineReferral, receiveReferral } from '#server/services/move-referral'
import { saveCells } from '#server/services/save-cells'
import { changeReferral } from '#server/services/save-referral'
import { startStudy } from '#server/services/start-study'
import { viewReferral } from '#server/services/view-referral'
import { handOverStudy, stopStudy } from '#server/services/hand-over-study'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'

/** Two people act at once: one wins, the other is told, and the trail has one event. */
const t = await testContext()
const c = await clinic(t)

async function race(...acts: Promise<unknown>[]) {
  const results = await Promise.allSettled(acts)
  const codes = results.map(result => result.status === 'fulfilled' ? 'won' : (result.reason as { code?: string }).code)
  return codes.toSorted()
}
const count = async (id: string, name: string) => (await eventNames(t, id)).filter(event => event === name).length

describe('two at once', () => {
  it('accept one referral', async () => {
    const id = await c.draft()
    await receiveReferral(c.admin, { id })
    const accept = (context: typeof c.admin) => acceptReferral(context, { id, protocol: 'carpal-tunnel' })
    expect(await race(accept(c.neurologist), accept(c.director))).toEqual(['won', 'wrong-state'])
    expect(await count(id, 'referral.accepted')).toBe(1)
  })
  it('accept and decline one referral', async () => {
    const id = await c.draft()
    await receiveReferral(c.admin, { id })
    const codes = await race(acceptReferral(c.neurologist, { id, protocol: 'carpal-tunnel' }), declineReferral(c.director, { id, reason: 'elsewhere' }))
    // Declining an accepted referral is a step of its own: whoever comes second may still decline, never accept.
    const history = (await viewReferral(c.admin, id)).history.map(change => change.to)
    expect([['won', 'won'], ['won', 'wrong-state']]).toContainEqual(codes)
    expect(history.at(-1)).toBe('declined')
  })
  it('book the same room for two patients', async () => {
    const [first, second] = [await c.accepted(), await c.accepted()]
    const book = (id: string, room = 'Room 1') => bookReferral(c.admin, { id, ...c.slot({ date: '2027-05-03', room, technologistId: c.technologistUser.id }) })
    expect(await race(book(first), book(second))).toEqual(['double-booking', 'won'])
    const states = [await viewReferral(c.admin, first), await viewReferral(c.admin, second)].map(referral => referral.state)
    expect(states.toSorted()).toEqual(['accepted', 'booked'])
  })
  it('book one patient twice', async () => {
    const id = await c.accepted()
    await race(bookReferral(c.admin, { id, ...c.slot({ date: '2027-05-04' }) }), bookReferral(c.admin, { id, ...c.slot({ date: '2027-05-05' }) }))
    const open = await t.db.selectFrom('booking').select('id').where('referralId', '=', id).where('state', '=', 'booked').execute()
    expect(open).toHaveLength(1)
  })
  it('start one study', async () => {
    const id = await c.booked()
    expect(await race(startStudy(c.technologist, { referralId: id }), startStudy(c.neurologist, { referralId: id }))).toEqual(['won', 'wrong-state'])
    expect(await t.db.selectFrom('study').select('id').where('referralId', '=', id).execute()).toHaveLength(1)
  })
  it('change one referral', async () => {
    const id = await c.draft()
    const form = await viewReferral(c.admin, id)
    const change = (onset: string) => changeReferral(c.admin, { id, revision: 1, input: { ...form, onset } })
    expect(await race(change('May'), change('June'))).toEqual(['changed-meanwhile', 'won'])
    expect(await count(id, 'referral.changed')).toBe(1)
  })
  it('type into one cell: both are told what happened, one value stands', async () => {
    const id = await c.recording()
    const row = (await c.study(id)).study.runs[0]!.rows[0]!
    const type = (entry: number) => saveCells(c.technologist, { id, cells: [{ saveId: randomUUID(), rowId: row.id, field: 'latencyMs', entry, revision: 0 }] })
    const [first, second] = await Promise.all([type(4.2), type(5.2)])
    const answers = [first.cells[0]!, second.cells[0]!]
    expect(answers.map(answer => answer.saved).toSorted()).toEqual([false, true])
    const winner = first.cells[0]!.saved ? 4.2 : 5.2
    expect(answers.find(answer => !answer.saved)).toMatchObject({ because: 'changed-meanwhile', theirs: { entry: winner, revision: 1, by: c.technologistUser.name } })
    expect((await c.study(id)).study.runs[0]!.rows[0]!.values.latencyMs).toBe(winner)
  })
  it('type into two cells of one row: both stand', async () => {
    const id = await c.recording()
    const row = (await c.study(id)).study.runs[0]!.rows[0]!
    const type = (field: string, entry: number) => saveCells(c.technologist, { id, cells: [{ saveId: randomUUID(), rowId: row.id, field, entry, revision: 0 }] })
    await Promise.all([type('latencyMs', 4.2), type('amplitudeMv', 6.8)])
    expect((await c.study(id)).study.runs[0]!.rows[0]!.values).toEqual({ latencyMs: 4.2, amplitudeMv: 6.8 })
  })
  it('hand over and stop one study', async () => {
    const id = await c.recording({ side: 'right' })
    for (const run of (await c.study(id)).study.runs) await c.type(id, run.technique, 'right', [run.technique.includes('motor') ? { latencyMs: 3.1 } : { onsetLatencyMs: 2.7 }])
    expect(await race(handOverStudy(c.technologist, { id, note: '' }), stopStudy(c.technologist, { id, reason: 'cannot go on' }))).toEqual(['won', 'wrong-state'])
  })
})
