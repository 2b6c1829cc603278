import { describe, expect, it } from 'vitest'
import { writeTogether } from '#server/services/write-together'
import { testContext } from './helpers'

const t = await testContext()
const put = (key: string, value = key) => writeTogether(t.db, async (trx) => {
  await trx.insertInto('meta').values({ key, value }).execute()
  return value
})
const stored = async () => (await t.db.selectFrom('meta').select('key').where('key', 'like', 'w%').orderBy('key').execute()).map(row => row.key)

describe('writes that come together', () => {
  it('are each answered with their own result, and are on the disk then', async () => {
    const keys = Array.from({ length: 25 }, (_, index) => `w${String(index).padStart(2, '0')}`)
    expect(await Promise.all(keys.map(key => put(key)))).toEqual(keys)
    expect(await stored()).toEqual(keys)
  })
  it('one that fails fails alone', async () => {
    const results = await Promise.allSettled([put('wa'), put('w00'), put('wb')])
    expect(results.map(result => result.status)).toEqual(['fulfilled', 'rejected', 'fulfilled'])
    expect(await stored()).toEqual(expect.arrayContaining(['wa', 'wb']))
  })
  it('one alone that fails is told, and the next is written', async () => {
    await expect(put('wa')).rejects.toThrow(/UNIQUE/)
    expect(await put('wc')).toBe('wc')
  })
  it('those that come while others are being written follow', async () => {
    const first = put('wd')
    await new Promise(done => setImmediate(done))
    await Promise.all([first, put('we'), put('wf')])
    expect(await stored()).toEqual(expect.arrayContaining(['wd', 'we', 'wf']))
  })
})
