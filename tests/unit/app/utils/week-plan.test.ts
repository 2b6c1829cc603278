import { describe, expect, it } from 'vitest'
import { capacityOf, hindranceAt, hoursWords, lanesOf, movedByKey, movedTo, shownDays, shownHours, type Placing } from '../../../../app/utils/week-plan'
import { openDay, openMinutes, outsideHours, mondayOf, weekdayOf } from '#shared/open-hours'
import { dueOf } from '#shared/referral-clocks'
import { momentWords } from '#shared/moment-words'
import { policies } from '#shared/policies/index'
import type { Week, WeekBooking } from '#shared/schemas/week'

const hours = [1, 2, 3, 4, 5].flatMap(weekday => [{ weekday, opensAt: '08:00', closesAt: '12:00' }, { weekday, opensAt: '13:00', closesAt: '17:00' }])
const closed = [{ day: '2026-12-04', reason: 'holiday' }]
const daysOfWeek = ['2026-11-30', '2026-12-01', '2026-12-02', '2026-12-03', '2026-12-04', '2026-12-05', '2026-12-06']
const booking = (changes: Partial<WeekBooking> = {}): WeekBooking => ({ bookingId: 'b', referralId: 'r', number: 'REF-1', patientName: 'Invented, Ida', urgency: 'routine', state: 'booked', room: 'Room 1', technologistId: 'ann', day: '2026-12-02', startTime: '09:00', minutes: 60, ...changes })
const week = (bookings: WeekBooking[] = [booking()]): Week => ({
  siteId: 's', timeZone: 'Europe/Prague', from: '2026-11-30', today: '2026-12-01', days: daysOfWeek.map(day => openDay(day, hours, closed)), rooms: ['Room 1', 'Room 2'],
  technologists: [{ id: 'ann', name: 'Ann', days: daysOfWeek.slice(0, 5) }, { id: 'ben', name: 'Ben', days: ['2026-12-02'] }], bookings, waiting: [], waitingTotal: 0,
})
const placing = (changes: Partial<Placing> = {}): Placing => ({ referralId: 'r2', bookingId: null, who: 'Other, Otto', minutes: 60, day: '2026-12-02', time: '09:30', room: 'Room 2', technologistId: null, ...changes })

describe('a week', () => {
  it('shows the weekend only when something is there', () => {
    expect(shownDays(week()).length).toBe(5)
    expect(shownDays(week([booking({ day: '2026-12-05' })])).map(day => day.day)).toContain('2026-12-05')
  })
  it('has a column for each room, or for each person at work and one without a name', () => {
    expect(lanesOf(week(), 'room').length).toBe(10)
    expect(lanesOf(week(), 'technologist').filter(lane => lane.day === '2026-12-02').map(lane => lane.label)).toEqual(['Ann', 'Ben', 'not named'])
  })
  it('shows working hours and what lies outside them', () => {
    expect(shownHours(week())).toEqual({ from: 480, until: 1020 })
    expect(shownHours(week([booking({ startTime: '06:30' }), booking({ startTime: '19:15' })]))).toEqual({ from: 360, until: 1260 })
  })
  it('counts capacity by rooms or people, whichever are fewer', () => {
    const days = week().days
    expect(capacityOf(week(), days[2]!)).toEqual({ booked: 60, open: 2 * 480 })
    expect(capacityOf(week(), days[1]!)).toEqual({ booked: 0, open: 480 })
    expect(capacityOf(week(), days[4]!)).toEqual({ booked: 0, open: 0 })
    expect(hoursWords(330)).toBe('5.5 h')
  })
})

describe('whether a place is free', () => {
  it.each([
    ['free', placing({ room: 'Room 2' }), null],
    ['the room is taken', placing({ room: 'Room 1' }), 'Room 1 is taken from 09:00 by Invented, Ida'],
    ['ends as the other begins', placing({ room: 'Room 1', time: '08:00' }), null],
    ['the technologist is booked in another room', placing({ technologistId: 'ann' }), 'Ann is booked from 09:00 with Invented, Ida'],
    ['the technologist does not work', placing({ day: '2026-12-03', technologistId: 'ben' }), 'Ben does not work here on that day'],
    ['over lunch', placing({ time: '11:30' }), 'The site works from 08:00 to 12:00 and 13:00 to 17:00 on that day'],
    ['a closed day', placing({ day: '2026-12-04' }), 'The site is closed on that day: holiday'],
    ['a day that is over', placing({ day: '2026-11-30' }), 'This day is over'],
    ['its own place', placing({ bookingId: 'b', room: 'Room 1', technologistId: 'ann' }), null],
  ])('%s', (_, where, words) => expect(hindranceAt(week(), where)?.words ?? null).toBe(words))
  it('a missed booking holds nothing', () => expect(hindranceAt(week([booking({ state: 'did-not-attend' })]), placing({ room: 'Room 1' }))).toBeNull())
})

describe('moving by keyboard and pointer', () => {
  it.each([
    ['ArrowUp', { time: '09:15' }], ['ArrowDown', { time: '09:45' }], ['ArrowLeft', { room: 'Room 1' }], ['ArrowRight', { day: '2026-12-03', room: 'Room 1' }], ['PageDown', { day: '2026-12-03', room: 'Room 2' }], ['PageUp', { day: '2026-12-01' }],
  ])('%s', (key, change) => expect(movedByKey(week(), 'room', placing(), key)).toEqual({ ...placing(), ...change }))
  it('stops at the edges', () => {
    expect(movedByKey(week(), 'room', placing({ time: '08:00' }), 'ArrowUp')?.time).toBe('08:00')
    expect(movedByKey(week(), 'room', placing({ time: '16:00' }), 'ArrowDown')?.time).toBe('16:00')
    expect(movedByKey(week(), 'room', placing({ day: '2026-12-04' }), 'ArrowRight')).toEqual(placing({ day: '2026-12-04' }))
  })
  it('by person it changes the person', () => expect(movedByKey(week(), 'technologist', placing({ technologistId: 'ann' }), 'ArrowRight')).toMatchObject({ technologistId: 'ben', room: 'Room 2' }))
  it('leaves other keys alone', () => expect(movedByKey(week(), 'room', placing(), 'x')).toBeNull())
  it('a pointer falls on the nearest quarter of an hour', () => expect(movedTo(week(), placing(), { day: '2026-12-03', kind: 'room', id: 'Room 1', label: 'Room 1' }, 611)).toMatchObject({ day: '2026-12-03', room: 'Room 1', time: '10:15' }))
})

describe('hours, clocks and moments in words', () => {
  it.each([['2026-12-02', 3], ['2026-12-06', 7], ['2026-11-30', 1]])('%s is weekday %i', (day, weekday) => expect(weekdayOf(day)).toBe(weekday))
  it('a Monday begins its week', () => expect([mondayOf('2026-11-30'), mondayOf('2026-12-06')]).toEqual(['2026-11-30', '2026-11-30']))
  it('without stated hours any time may be booked', () => expect(outsideHours(openDay('2026-12-05', [], []), '03:00', 60)).toBeNull())
  it('a day open to midday and from one has eight hours', () => expect(openMinutes(openDay('2026-12-02', hours, []))).toBe(480))
  it.each([['received', 'urgent', '2026-12-02T08:00:00.000Z'], ['returned', 'same-week', '2026-12-02T08:00:00.000Z'], ['booked', 'urgent', null], ['answered', 'routine', null]] as const)('%s, %s is due %s', (state, urgency, due) => expect(dueOf({ state, urgency, stateSince: '2026-12-01T08:00:00.000Z' }, policies.clocks.initial)).toBe(due))
  it('a moment in words', () => expect([momentWords('2026-03-09T13:02:00Z', 'Europe/Prague'), momentWords('no moment', 'UTC')]).toEqual(['9 March 2026, 14:02 (Europe/Prague)', 'no moment']))
})
