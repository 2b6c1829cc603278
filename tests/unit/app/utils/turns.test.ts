import { afterEach, beforeEach, expect, it, vi } from 'vitest'
import { makeTurns } from '../../../../app/utils/turns'

const FRAME_MS = 16
let done: string[]
let at: number
let turns: ReturnType<typeof makeTurns>
const say = (words: string) => () => void done.push(words)
/** So many frames go by. */
const frames = (count: number) => vi.advanceTimersByTimeAsync(count * FRAME_MS)

beforeEach(() => {
  vi.useFakeTimers()
  done = []
  at = Date.now()
  turns = makeTurns(() => new Promise(next => setTimeout(next, FRAME_MS)), () => Date.now() - at)
})
afterEach(() => {
  turns.stop()
  vi.useRealTimers()
})

it('does one piece in each frame, in order, none in the task that asked', async () => {
  turns.soon('a', say('a'))
  turns.soon('b', say('b'))
  expect(done).toEqual([])
  await frames(1)
  expect(done).toEqual(['a'])
  await frames(1)
  expect(done).toEqual(['a', 'b'])
})

it('does what is asked for twice once, with the later word', async () => {
  turns.soon('a', say('earlier'))
  turns.soon('a', say('later'))
  await frames(3)
  expect(done).toEqual(['later'])
})

it('lets what stands beside wait until nobody asked for it for a while', async () => {
  for (let key = 0; key < 5; key++) {
    turns.atRest('plot', say('plot'))
    await vi.advanceTimersByTimeAsync(100)
  }
  expect(done).toEqual([])
  await vi.advanceTimersByTimeAsync(200)
  expect(done).toEqual(['plot'])
})

it('does not let it wait for ever while keys go on', async () => {
  for (let key = 0; key < 12; key++) {
    turns.atRest('plot', say('plot'))
    turns.soon('cell', say('cell'))
    await vi.advanceTimersByTimeAsync(100)
  }
  expect(done.filter(words => words === 'plot')).toEqual(['plot'])
})

it('does everything at once when somebody is about to look', async () => {
  turns.soon('a', say('a'))
  turns.atRest('plot', say('plot'))
  turns.now()
  expect(done).toEqual(['a', 'plot'])
  await vi.advanceTimersByTimeAsync(2_000)
  expect(done).toEqual(['a', 'plot'])
})

it('goes on after a piece that failed', async () => {
  const failed = vi.fn()
  process.once('unhandledRejection', failed)
  turns.soon('broken', () => {
    throw new Error('broken')
  })
  await frames(2)
  turns.soon('a', say('a'))
  await frames(2)
  expect(done).toEqual(['a'])
})
