import 'fake-indexeddb/auto'
import { beforeEach, describe, expect, it } from 'vitest'
import type { SaveCell, SavedCell, StudyView } from '../../../../shared/schemas/bench'
import type { SessionUser } from '../../../../shared/schemas/user'
import { answerFor, isOldCache, isServerGone, shellFor } from '../../../../app/service-worker/rules'
import { deviceId, openOfflineDatabase, type OfflineDatabase } from '../../../../app/utils/offline/database'
import { importKey, seal, unseal } from '../../../../app/utils/offline/seal'
import { makeOfflineStore } from '../../../../app/utils/offline/store'
import { newId } from '../../../../app/utils/new-id'
import { emptyQueue, enqueue, mergeKept, sendQueue, takeBatch, unsavedCells, type SaveQueue } from '../../../../app/utils/save-queue'

const keyOf = (byte: number) => importKey(btoa(String.fromCharCode(...new Uint8Array(32).fill(byte))))
let serial = 0
const makeId = () => `save${++serial}`
let db: OfflineDatabase
let count = 0
beforeEach(async () => {
  db = await openOfflineDatabase(`test-${++count}`)
})
const typed = (...cells: [string, number][]): SaveQueue => cells.reduce((queue, [field, entry]) => enqueue(queue, 'row', field, entry), emptyQueue({ 'row/latencyMs': 3, 'other/latencyMs': 8 }))
const place = { studyId: 'study', number: 'S-2026-0001', tab: 'tab' }

describe('what lies on the device', () => {
  it('opens with the same key, at the same place, and with nothing else', async () => {
    const [mine, other] = [await keyOf(1), await keyOf(2)]
    const sealed = await seal(mine, 'here', { entry: 4.2 })
    expect(await unseal(mine, 'here', sealed)).toEqual({ entry: 4.2 })
    expect(await unseal(other, 'here', sealed)).toBeNull()
    expect(await unseal(mine, 'elsewhere', sealed)).toBeNull()
    new Uint8Array(sealed.data)[0]! ^= 1
    expect(await unseal(mine, 'here', sealed)).toBeNull()
  })
  it('holds nothing readable of what was typed, nor of the study', async () => {
    const store = makeOfflineStore(db, 'person', await keyOf(1))
    await store.keep({ ...place, queue: typed(['latencyMs', 98.76]) })
    await store.keepStudy({ user: { id: 'person', name: 'Mirela' } as SessionUser, view: { id: 'study', number: 'S-2026-0001', band: { name: 'Tollefsen' } } as unknown as StudyView })
    const everything = [...await db.getAll('queues'), ...await db.getAll('studies')]
    const readable = everything.map(record => JSON.stringify(record) + new TextDecoder().decode(record.sealed.data)).join()
    expect(everything).toHaveLength(2)
    expect(readable).not.toMatch(/98\.76|latencyMs|Tollefsen|Mirela|S-2026/)
  })
  it('is the same after a restart, and the device keeps its id', async () => {
    const first = await deviceId(db, newId)
    await makeOfflineStore(db, 'person', await keyOf(1)).keep({ ...place, queue: takeBatch(typed(['latencyMs', 4]), makeId) })
    const name = db.name
    db.close()
    const again = await openOfflineDatabase(name)
    expect(await deviceId(again, newId)).toBe(first)
    const [kept] = await makeOfflineStore(again, 'person', await keyOf(1)).queues()
    expect(kept).toMatchObject({ studyId: 'study', number: 'S-2026-0001', tab: 'tab' })
    expect(kept!.queue.inFlight).toMatchObject([{ saveId: `save${serial}`, field: 'latencyMs', entry: 4, revision: 3 }])
  })
  it('of another person nothing is seen, counted or taken away', async () => {
    const [mine, theirs] = [makeOfflineStore(db, 'a', await keyOf(1)), makeOfflineStore(db, 'b', await keyOf(2))]
    await mine.keep({ ...place, queue: typed(['latencyMs', 4]) })
    expect([await theirs.count(), await theirs.queues(), await theirs.lastStudy('study')]).toEqual([0, [], null])
    await theirs.drop(place)
    expect(await mine.count()).toBe(1)
  })
  it('two tabs of one person keep a queue each', async () => {
    const store = makeOfflineStore(db, 'person', await keyOf(1))
    await store.keep({ ...place, queue: typed(['latencyMs', 4]) })
    await store.keep({ ...place, tab: 'second', queue: typed(['amplitudeMv', 5], ['distanceMm', 80]) })
    expect(await store.count()).toBe(3)
  })
  it('a queue that was acknowledged is taken away', async () => {
    const store = makeOfflineStore(db, 'person', await keyOf(1))
    await store.keep({ ...place, queue: typed(['latencyMs', 4]) })
    await store.keep({ ...place, queue: emptyQueue({}) })
    expect(await db.getAll('queues')).toEqual([])
  })
})

describe('what a closed tab left comes back', () => {
  it('a batch under way is repeated under its own ids, a waiting cell against the revision it was seen with', () => {
    const left = enqueue(takeBatch(typed(['latencyMs', 4]), makeId), 'row', 'amplitudeMv', 6)
    const fresh = emptyQueue({ 'row/latencyMs': 5, 'row/amplitudeMv': 2 })
    const merged = mergeKept(fresh, left)
    expect(merged.inFlight).toEqual(left.inFlight)
    expect(unsavedCells(merged)).toHaveLength(2)
  })
  it('never overwrites what somebody stored meanwhile: the old revision is sent', () => {
    const merged = mergeKept(emptyQueue({ 'row/latencyMs': 5 }), typed(['latencyMs', 4]))
    expect(takeBatch(merged, makeId).inFlight).toMatchObject([{ entry: 4, revision: 3 }])
  })
  it('a cell typed anew on this page is the later word', () => {
    const merged = mergeKept(enqueue(emptyQueue({ 'row/latencyMs': 5 }), 'row', 'latencyMs', 9), typed(['latencyMs', 4]))
    expect(takeBatch(merged, makeId).inFlight).toMatchObject([{ entry: 9, revision: 5 }])
  })
})

/** A server as the real one answers: by save id, and by revision. */
function server(revisions: Record<string, number> = {}) {
  const known = new Map<string, SavedCell>()
  const stored: [string, unknown][] = []
  let broken = 0
  const put = async (cells: SaveCell[]): Promise<SavedCell[]> => {
    const answers = cells.map((cell): SavedCell => {
      const again = known.get(cell.saveId)
      if (again) return again
      const { saveId, rowId, field } = cell
      if (field === 'gone') return { saveId, rowId, field, saved: false, because: 'not-valid', message: 'The row was removed meanwhile.' }
      const stands = revisions[`${rowId}/${field}`] ?? cell.revision
      if (stands !== cell.revision) return { saveId, rowId, field, saved: false, because: 'changed-meanwhile', theirs: { entry: 7, revision: stands, by: 'B', at: '' } }
      stored.push([field, cell.entry])
      const answer = { saveId, rowId, field, saved: true as const, revision: cell.revision + 1, savedAt: '' }
      known.set(saveId, answer)
      return answer
    })
    if (broken-- > 0) throw new Error('the answer was lost')
    return answers
  }
  return { put, stored, loseAnswers: (times: number) => broken = times }
}

describe('sent without a page', () => {
  const run = (queue: SaveQueue, s: ReturnType<typeof server>, kept: SaveQueue[] = []) => sendQueue(queue, s.put, makeId, async next => void kept.push(next))

  it('once, even when the answer is lost and the tab dies', async () => {
    const s = server()
    const kept: SaveQueue[] = []
    s.loseAnswers(1)
    await expect(run(typed(['latencyMs', 4], ['amplitudeMv', 6]), s, kept)).rejects.toThrow('the answer was lost')
    const left = await run(kept.at(-1)!, s)
    expect(unsavedCells(left)).toEqual([])
    expect(s.stored).toEqual([['latencyMs', 4], ['amplitudeMv', 6]])
  })
  it('a conflict stays for the person to choose, the rest is stored', async () => {
    const s = server({ 'row/latencyMs': 9 })
    const left = await run(typed(['latencyMs', 4], ['amplitudeMv', 6]), s)
    expect(Object.keys(left.conflicts)).toEqual(['row/latencyMs'])
    expect(s.stored).toEqual([['amplitudeMv', 6]])
  })
  it('what the server refuses is not thrown away', async () => {
    const left = await run(typed(['gone', 4], ['amplitudeMv', 6]), server())
    expect(unsavedCells(left)).toEqual([{ rowId: 'row', field: 'gone', entry: 4 }])
  })
})

describe('the service worker', () => {
  const origin = 'https://clinic.example'
  const study = '6f1c3a52-9d1e-4b44-8f3e-3f6a4b1c2d11'
  it.each([
    { path: `/bench/${study}`, mode: 'navigate', answer: 'study' },
    { path: '/bench/offline?study=x', mode: 'navigate', answer: 'shell' },
    { path: '/_nuxt/entry.js', mode: 'cors', answer: 'asset' },
    { path: '/_nuxt/older.js', mode: 'cors', answer: 'leave' },
    { path: '/bench', mode: 'navigate', answer: 'leave' },
    { path: '/reading/x', mode: 'navigate', answer: 'leave' },
    { path: `/api/studies/${study}`, mode: 'cors', answer: 'leave' },
    { path: `/bench/${study}`, mode: 'cors', answer: 'leave' },
    { path: `/bench/${study}`, mode: 'navigate', method: 'POST', answer: 'leave' },
    { path: '/_nuxt/entry.js', mode: 'cors', from: 'https://elsewhere.example', answer: 'leave' },
  ])('$mode $path: $answer', ({ path, mode, answer, method = 'GET', from = origin }) => {
    expect(answerFor({ method, mode, url: new URL(path, from) }, origin, each => each === '/_nuxt/entry.js')).toBe(answer)
  })
  it('shows the study that was asked for', () => expect(shellFor(`/bench/${study}`)).toBe(`/bench/offline?study=${study}`))
  it.each([[502, true], [503, true], [504, true], [500, false], [404, false], [0, false]])('%s from a proxy: the server is gone: %s', (status, gone) => expect(isServerGone(status)).toBe(gone))
  it('clears its own caches of earlier builds and no others', () => {
    expect(['orthodrome-shell-old', 'orthodrome-shell-new', 'somebody-else'].filter(name => isOldCache(name, 'new'))).toEqual(['orthodrome-shell-old'])
  })
})

it('ids are made without TLS too', () => {
  const original = crypto.randomUUID
  Object.defineProperty(crypto, 'randomUUID', { value: undefined, configurable: true })
  const ids = [newId(), newId()]
  Object.defineProperty(crypto, 'randomUUID', { value: original, configurable: true })
  expect(ids[0]).toMatch(/^[0-9a-f]{8}-[0-9a-f]{4}-4[0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}$/)
  expect(ids[0]).not.toBe(ids[1])
})
