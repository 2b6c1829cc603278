import { describe, expect, it } from 'vitest'
import { formatMoment, parseMoment } from '../../../../app/utils/dates'

describe('a moment as people type it', () => {
  it.each([
    ['9 Mar 2026, 14:02', 'Europe/Prague', '2026-03-09T13:02:00.000Z'],
    ['9 March 2026 14:02', 'Europe/Prague', '2026-03-09T13:02:00.000Z'],
    ['2026-07-01 9:05', 'Europe/Prague', '2026-07-01T07:05:00.000Z'],
    ['2026-07-01, 09:05', 'UTC', '2026-07-01T09:05:00.000Z'],
    ['2026-07-01 00:30', 'America/New_York', '2026-07-01T04:30:00.000Z'],
    ['2026-10-25 02:30, which occurs twice', 'Europe/Prague', null],
    ['2026-10-25 02:30', 'Europe/Prague', '2026-10-25T00:30:00.000Z'],
    ['2026-03-29 02:30', 'Europe/Prague', '2026-03-29T01:30:00.000Z'],
    ['2026-03-09', 'UTC', null],
    ['14:02', 'UTC', null],
    ['2026-03-09 24:02', 'UTC', null],
    ['2026-03-09 12:60', 'UTC', null],
    ['31 February 2026, 12:00', 'UTC', null],
    ['', 'UTC', null],
  ])('%j in %s', (typed, zone, instant) => expect(parseMoment(typed, zone)).toBe(instant))
  it('what is shown can be typed again', () => {
    for (const instant of ['2026-01-05T23:59:00.000Z', '2026-07-05T04:01:00.000Z']) expect(parseMoment(formatMoment(instant, 'Europe/Prague'), 'Europe/Prague')).toBe(instant)
  })
})
