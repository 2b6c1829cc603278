import { expect, it } from 'vitest'
import { countAttempt } from '#server/services/sign-in-limits'
import { testContext } from './helpers'

const t = await testContext()

/** NIST SP 800-63B-4, 3.2.2 (from memory): at most 100 failures in a row for one account, from a known browser too. */
it('a browser that is known may not guess on for days: 90 failures in 24 hours, then a pause', async () => {
  let taken = 0
  const attempt = () => countAttempt(t.db, { address: '192.0.2.1', account: 'account', device: 'device' })
  const realNow = Date.now
  let offset = 0
  Date.now = () => realNow() + offset
  try {
    for (let quarter = 0; quarter < 40; quarter++) {
      for (let tries = 0; tries < 10; tries++) taken += await attempt().then(() => 1, () => 0)
      offset += 15 * 60_000 + 1
    }
  }
  finally { Date.now = realNow }
  expect(taken).toBe(90)
})
