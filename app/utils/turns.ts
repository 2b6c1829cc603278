import { whenFree } from './when-free'

const REST_MS = 200
const LATEST_MS = 1_000

interface Waiting { act: () => void, firstAsked: number, lastAsked: number }

/**
 * What a key sets off and what need not stand on the page at once: one piece whenever the browser is free, so that no key
 * waits and no frame carries two. A piece that is asked for again before its turn is done once.
 *
 * @example
 * const turns = makeTurns()
 * turns.soon('sheets', draw) // as soon as the browser is free
 * turns.atRest('plot', drawPlot) // when nothing asked for it for a while, at the latest after a second
 */
export function makeTurns(free: () => Promise<void> = whenFree, clock: () => number = () => performance.now()) {
  const soon = new Map<unknown, () => void>()
  const rest = new Map<unknown, Waiting>()
  let isRunning = false
  let timer: ReturnType<typeof setTimeout> | undefined

  const dueAt = ({ firstAsked, lastAsked }: Waiting) => Math.min(firstAsked + LATEST_MS, lastAsked + REST_MS)

  function next(): (() => void) | undefined {
    for (const [what, act] of soon) {
      soon.delete(what)
      return act
    }
    for (const [what, waiting] of rest) {
      if (dueAt(waiting) > clock()) continue
      rest.delete(what)
      return waiting.act
    }
    return undefined
  }

  async function run() {
    clearTimeout(timer)
    if (isRunning) return
    isRunning = true
    try {
      await free()
      for (let act = next(); act; act = next()) {
        act()
        await free()
      }
    }
    finally {
      isRunning = false
    }
    if (rest.size > 0) timer = setTimeout(() => void run(), Math.max(0, Math.min(...[...rest.values()].map(dueAt)) - clock()))
  }

  return {
    soon(what: unknown, act: () => void) {
      soon.set(what, act)
      void run()
    },
    atRest(what: unknown, act: () => void) {
      const asked = clock()
      rest.set(what, { act, firstAsked: rest.get(what)?.firstAsked ?? asked, lastAsked: asked })
      if (!isRunning && rest.size === 1) void run()
    },
    /** Everything that waits, at once: before something looks at the page. */
    now() {
      const all = [...soon.values(), ...[...rest.values()].map(waiting => waiting.act)]
      soon.clear()
      rest.clear()
      for (const act of all) act()
    },
    stop() {
      clearTimeout(timer)
      soon.clear()
      rest.clear()
    },
  }
}

export type Turns = ReturnType<typeof makeTurns>
