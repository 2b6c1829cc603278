import { describe, expect, it } from 'vitest'
import { leftWords, startWarming, timeLeft, WARMING_MINUTES, type Warming } from '../../../../app/utils/warming'
import { momentAt, zonedParts } from '../../../../app/utils/dates'

const foot: Warming = { segment: 'foot', side: 'right', startedAt: '2026-12-01T10:00:00.000Z', minutes: WARMING_MINUTES, text: '' }

describe('the clock of warming', () => {
  it.each([
    [25 * 60_000, '25:00 left'], [90_000, '1:30 left'], [500, '0:01 left'], [0, 'time is over'], [-59_000, 'time is over'], [-61_000, 'time is over since 1 min'], [-600_000, 'time is over since 10 min'],
  ])('%i ms: %s', (left, words) => expect(leftWords(left)).toBe(words))
  it('runs from its start for its minutes', () => expect(timeLeft(foot, Date.parse('2026-12-01T10:24:00.000Z'))).toBe(60_000))
  it('begins anew for the same limb, beside the others', () => {
    const hand: Warming = { ...foot, segment: 'hand' }
    const again = { ...foot, startedAt: '2026-12-01T10:10:00.000Z' }
    expect(startWarming([foot, hand], again)).toEqual([hand, again])
  })
})

describe('a wall clock in a zone', () => {
  it.each([
    ['2026-03-09', '14:02', 'Europe/Prague', '2026-03-09T13:02:00.000Z'],
    ['2026-07-09', '00:30', 'Europe/Prague', '2026-07-08T22:30:00.000Z'],
    ['2026-12-01', '23:59', 'America/St_Johns', '2026-12-02T03:29:00.000Z'],
    ['2026-03-29', '02:30', 'Europe/Prague', null], // an hour that the clocks leave out
    ['2026-03-29', '25:00', 'Europe/Prague', null],
  ])('%s %s in %s', (day, time, zone, instant) => {
    expect(momentAt(day, time, zone)).toBe(instant)
    if (instant) expect(zonedParts(instant, zone)).toEqual({ day, time })
  })
})
