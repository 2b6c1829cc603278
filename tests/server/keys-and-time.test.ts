import { chmodSync, readFileSync, statSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { keysFrom, loadKeys } from '#server/services/keys'
import { dayBounds, instantOf, isTimeZone, localDate, localTime } from '#server/services/site-time'
import { openServices } from '#server/utils/open-services'
import { testContext } from './helpers'

const t = await testContext()
const keys = keysFrom(Buffer.alloc(32, 1))

describe('sealing', () => {
  it('comes back as it went, differs each time, and gives way to no other key and no change', () => {
    const sealed = keys.seal('seven words')
    expect(keys.unseal(sealed)).toBe('seven words')
    expect(keys.seal('seven words')).not.toBe(sealed)
    expect(() => keysFrom(Buffer.alloc(32, 2)).unseal(sealed)).toThrow()
    const bytes = Buffer.from(sealed, 'base64')
    for (const at of [0, 12, bytes.length - 1]) {
      const changed = Buffer.from(bytes)
      changed[at]! ^= 1
      expect(() => keys.unsealBytes(changed)).toThrow()
    }
  })
  it('uses a key of its own for each purpose', () => {
    expect(new Set([keys.auditMac('x'), keys.viewMac('x'), keys.tokenHash('x'), keys.authSecret]).size).toBe(4)
  })
})

describe('the key file', () => {
  it('is made once, 32 bytes, for the owner alone', () => {
    const file = `${t.dataDir}/made.key`
    loadKeys(file)
    const bytes = readFileSync(file)
    expect(bytes).toHaveLength(32)
    expect(statSync(file).mode & 0o777).toBe(0o600)
    loadKeys(file)
    expect(readFileSync(file)).toEqual(bytes)
    chmodSync(file, 0o644)
    expect(() => loadKeys(file)).toThrow(/read by other users/)
  })
  it('is never made anew beside an existing database, and another one is refused', async () => {
    const settings = { ...t.settings, dataDir: `${t.dataDir}/place` }
    const first = await openServices(settings, `${t.dataDir}/first.key`, t.context.log)
    await first.db.destroy()
    await expect(openServices(settings, `${t.dataDir}/lost.key`, t.context.log)).rejects.toThrow(/key file is missing/)
    loadKeys(`${t.dataDir}/second.key`)
    await expect(openServices(settings, `${t.dataDir}/second.key`, t.context.log)).rejects.toThrow(/not the one this database was made with/)
    const again = await openServices(settings, `${t.dataDir}/first.key`, t.context.log)
    await again.db.destroy()
  })
})

describe('a site\'s clock', () => {
  it.each([
    ['winter', '2026-01-05', '09:05', 'Europe/Prague', '2026-01-05T08:05:00.000Z'],
    ['summer', '2026-07-01', '09:00', 'Europe/Prague', '2026-07-01T07:00:00.000Z'],
    ['the last minute before the spring change', '2026-03-29', '01:59', 'Europe/Prague', '2026-03-29T00:59:00.000Z'],
    ['the hour that does not occur', '2026-03-29', '02:30', 'Europe/Prague', '2026-03-29T01:30:00.000Z'],
    ['the first of the two autumn hours', '2026-10-25', '02:30', 'Europe/Prague', '2026-10-25T00:30:00.000Z'],
    ['after the autumn change', '2026-10-25', '03:00', 'Europe/Prague', '2026-10-25T02:00:00.000Z'],
    ['west of Greenwich', '2026-03-08', '12:00', 'America/New_York', '2026-03-08T16:00:00.000Z'],
    ['a half-hour zone', '2026-12-02', '00:15', 'Asia/Kolkata', '2026-12-01T18:45:00.000Z'],
    ['the far side of the date line', '2026-12-02', '08:00', 'Pacific/Kiritimati', '2026-12-01T18:00:00.000Z'],
  ])('%s', (_name, date, time, zone, instant) => expect(instantOf(date, time, zone).toISOString()).toBe(instant))

  it('gives the day and the time back', () => {
    const instant = new Date('2026-03-28T23:30:00.000Z')
    expect([localDate(instant, 'Europe/Prague'), localTime(instant, 'Europe/Prague'), localDate(instant, 'America/New_York')]).toEqual(['2026-03-29', '00:30', '2026-03-28'])
  })
  it('knows that the day of the spring change has 23 hours', () => {
    const { from, until } = dayBounds('2026-03-29', 'Europe/Prague')
    expect((Date.parse(until) - Date.parse(from)) / 3_600_000).toBe(23)
  })
  it('knows zones from words', () => expect(['Europe/Prague', 'Nowhere/None'].map(isTimeZone)).toEqual([true, false]))
})
