import { mountSuspended, registerEndpoint } from '@nuxt/test-utils/runtime'
import { describe, expect, it } from 'vitest'
import BulkPanel from '~/components/intake/BulkPanel.vue'
import ReturnForm from '~/components/intake/ReturnForm.vue'
import WeekGrid from '~/components/intake/WeekGrid.vue'
import WeekPlacing from '~/components/intake/WeekPlacing.vue'
import LetterForm from '~/components/letter/LetterForm.vue'
import { askedBy } from '#shared/return-reasons'
import { openDay } from '#shared/open-hours'
import type { ReferralView } from '#shared/schemas/referral'
import type { Week } from '#shared/schemas/week'
import type { Placing } from '~/utils/week-plan'

const hours = [1, 2, 3, 4, 5].map(weekday => ({ weekday, opensAt: '08:00', closesAt: '17:00' }))
const days = ['2026-11-30', '2026-12-01', '2026-12-02', '2026-12-03', '2026-12-04', '2026-12-05', '2026-12-06']
const week: Week = {
  siteId: 's', timeZone: 'Europe/Prague', from: '2026-11-30', today: '2026-12-01', days: days.map(day => openDay(day, hours, [{ day: '2026-12-04', reason: 'holiday' }])), rooms: ['Room 1', 'Room 2'],
  technologists: [{ id: 'ann', name: 'Ann Invented', days: days.slice(0, 5) }], waiting: [], waitingTotal: 0,
  bookings: [{ bookingId: 'b', referralId: 'r', number: 'REF-1', patientName: 'Novak, Ida', urgency: 'urgent', state: 'booked', room: 'Room 1', technologistId: 'ann', day: '2026-12-02', startTime: '09:00', minutes: 60 }],
}
const placing: Placing = { referralId: 'r2', bookingId: null, who: 'Other, Otto', minutes: 60, day: '2026-12-02', time: '09:30', room: 'Room 1', technologistId: null }

describe('the week', () => {
  it('names each booking in full, shows closed days with their reason and how much is booked', async () => {
    const grid = await mountSuspended(WeekGrid, { props: { week, kind: 'room', placing: null, day: '2026-12-02' } })
    expect(grid.find('[data-booking="REF-1"]').text().replace(/\s+/g, ' ')).toBe('09:00 Novak: Wed 2 Dec 2026, 09:00 to 10:00, Novak, Ida, Room 1, Ann Invented, urgent')
    expect(grid.text()).toContain('closed: holiday')
    expect(grid.text()).toContain('1 h of 9 h booked')
    await grid.find('[data-booking="REF-1"]').trigger('click')
    expect(grid.emitted('pick')).toHaveLength(1)
  })
  it('draws what is being placed where it would stand, and hands keys on', async () => {
    const grid = await mountSuspended(WeekGrid, { props: { week, kind: 'room', placing, day: '2026-12-02' } })
    const ghost = grid.find('[data-test=ghost]')
    expect(ghost.text()).toContain('Other, Otto, Wed 2 Dec 2026, 09:30, Room 1')
    await ghost.trigger('keydown', { key: 'ArrowDown' })
    expect(grid.emitted('key')).toHaveLength(1)
  })
  it('says whether a place is free, and asks for the reason of a move only', async () => {
    const props = { week, slots: [], leadDays: 8, busy: false, problem: null, reason: '', outside: false }
    const book = await mountSuspended(WeekPlacing, { props: { ...props, placing } })
    expect(book.find('[data-test=preview]').text()).toContain('Wednesday 2 December 2026, 09:30 to 10:30, Room 1: not free. Room 1 is taken from 09:00 by Novak, Ida. 8 days after the referral came.')
    expect(book.text()).not.toContain('Reason of the move')
    const move = await mountSuspended(WeekPlacing, { props: { ...props, placing: { ...placing, bookingId: 'b' } } })
    expect(move.text()).toContain('Reason of the move')
    expect(move.find('[data-test=preview]').text()).toContain(': free.')
  })
  it('offers to book outside working hours on purpose only where that is all that stands against it', async () => {
    const props = { week, slots: [], leadDays: null, busy: false, problem: null, reason: '', outside: false }
    const early = await mountSuspended(WeekPlacing, { props: { ...props, placing: { ...placing, time: '07:00' } } })
    expect(early.text()).toContain('Outside working hours on purpose')
    const taken = await mountSuspended(WeekPlacing, { props: { ...props, placing } })
    expect(taken.text()).not.toContain('Outside working hours on purpose')
  })
})

describe('returning a referral', () => {
  const view = { physician: { id: 'p', name: 'Dr Invented', practiceName: 'Practice', town: 'Town', emailVerified: true } } as ReferralView
  it('has what is missing ticked, and sends it with one press', async () => {
    const form = await mountSuspended(ReturnForm, { props: { view, missing: [{ path: 'side', message: '' }, { path: 'cautions.cardiac-device', message: '' }], busy: false, problem: null } })
    expect(form.text()).toContain('Dr Invented, Town gets a mail with a link to complete it.')
    await form.find('form').trigger('submit')
    expect(form.emitted('send')).toEqual([[{ reasons: ['side', 'cautions'], note: '' }]])
  })
  it('asks for a reason, and for words with another question', async () => {
    const form = await mountSuspended(ReturnForm, { props: { view, missing: [], busy: false, problem: null } })
    await form.find('form').trigger('submit')
    expect(form.text()).toContain('Choose what is missing.')
    await form.findAll('input[type=checkbox]').at(-1)!.setValue(true)
    await form.find('form').trigger('submit')
    expect(form.text()).toContain('Write the question.')
    expect(form.emitted('send')).toBeUndefined()
  })
})

it('the page behind the link asks only what was asked', async () => {
  const form = await mountSuspended(LetterForm, { props: { path: '/api/letters/x', opened: { pass: 'x'.repeat(20), note: 'Which finger?', asked: askedBy(['examination', 'other']), values: { examination: '' }, uploads: [] } } })
  expect(form.findAll('textarea, input:not([type=file])').map(input => input.attributes('name'))).toEqual(['examination', 'words'])
  expect(form.text()).toContain('Which finger?')
})

it('an act on several shows what would happen before it can be done', async () => {
  registerEndpoint('/api/referrals/owners', () => [])
  registerEndpoint('/api/referrals/bulk', { method: 'POST', handler: () => [{ id: 'a', number: 'REF-1', who: 'Novak, Ida', ok: true, sentence: 'The referring physician gets the link once more.' }, { id: 'b', number: 'REF-2', who: 'Other, Otto', ok: false, sentence: 'Is draft: nobody outside is waited for.' }] })
  const panel = await mountSuspended(BulkPanel, { props: { ids: ['a', 'b'] } })
  expect(panel.text()).not.toContain('Remind')
  await panel.findAll('input[type=radio]')[2]!.setValue(true)
  await panel.findAll('button').find(one => one.text() === 'See what will happen')!.trigger('click')
  await expect.poll(() => panel.text()).toContain('Will be done for 1 of 2')
  expect(panel.text()).toContain('Not done: Is draft: nobody outside is waited for.')
  expect(panel.findAll('button').map(one => one.text())).toContain('Remind 1')
})
