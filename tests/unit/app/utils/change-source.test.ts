import { beforeEach, describe, expect, it } from 'vitest'
import type { ChangeNews } from '../../../../shared/change-notice'
import { makeChangeSource, POLL_MS, SILENCE_MS, type ChangeMessage, type SourceParts } from '../../../../app/utils/change-source'

const notice = { kind: 'study' as const, id: 's', what: 'study.started', siteId: 'a', by: null }

/** A browser without a network: streams that the test speaks through, a clock that it moves. */
function browser(withStream = true) {
  const opened: string[] = []
  const asked: string[] = []
  const heard: string[] = []
  let answer: { status: number, news: ChangeNews | null } = { status: 200, news: { seq: 5, again: false, changes: [] } }
  let handlers = new Map<string, (event: Event) => void>()
  let stream: { addEventListener: EventSource['addEventListener'], close: () => void, readyState: number, onerror: unknown } | undefined
  let timers: { at: number, act: () => void, id: number }[] = []
  let [now, serial] = [0, 0]
  const parts: SourceParts = {
    ...withStream
      ? { openStream: (path: string) => {
          opened.push(path)
          handlers = new Map()
          stream = { readyState: 1, onerror: null, close: () => stream = undefined, addEventListener: (name: string, act: unknown) => void handlers.set(name, act as (event: Event) => void) }
          return stream
        } }
      : {},
    ask: async (path) => {
      asked.push(path)
      return answer
    },
    later: (act, milliseconds) => {
      timers.push({ at: now + milliseconds, act, id: ++serial })
      return serial as unknown as ReturnType<typeof setTimeout>
    },
    never: id => timers = timers.filter(timer => timer.id !== id as unknown as number),
  }
  const source = makeChangeSource(parts, (message: ChangeMessage) => heard.push(message.type === 'change' ? message.notice.id : message.type))
  return {
    source, opened, asked, heard,
    says: (name: string, id = '', data: unknown = {}) => handlers.get(name)?.({ lastEventId: id, data: JSON.stringify(data) } as unknown as Event),
    breaks: () => {
      const broken = stream!
      broken.readyState = 2
      ;(broken.onerror as () => void)()
    },
    answers: (next: typeof answer) => answer = next,
    async pass(milliseconds: number) {
      now += milliseconds
      for (const timer of timers.filter(each => each.at <= now)) {
        timers = timers.filter(each => each !== timer)
        timer.act()
      }
      await new Promise(done => setTimeout(done))
    },
  }
}
let b: ReturnType<typeof browser>
beforeEach(() => b = browser())

describe('the line to the server', () => {
  it('hands on what it hears, and starts once however many tabs ask', () => {
    b.source.start()
    b.source.start()
    b.says('here', '7')
    b.says('change', '8', notice)
    b.says('again', '900')
    expect(b.opened).toEqual(['/api/events'])
    expect(b.heard).toEqual(['here', 's', 'again'])
  })
  it('a refused stream is asked for instead, from the number seen last, and opened again as soon as the server answers', async () => {
    b.source.start()
    b.says('here', '7')
    b.answers({ status: 0, news: null })
    b.breaks()
    await b.pass(0)
    await b.pass(POLL_MS)
    expect(b.opened).toHaveLength(1)
    b.answers({ status: 200, news: { seq: 9, again: false, changes: [notice] } })
    await b.pass(POLL_MS)
    expect(b.asked).toEqual(['/api/events/news?after=7', '/api/events/news?after=7', '/api/events/news?after=7'])
    expect(b.heard).toEqual(['here', 's', 'here'])
    expect(b.opened[1]).toBe('/api/events?after=9')
  })
  it('a proxy that holds the stream back: asked every few seconds', async () => {
    b.source.start()
    await b.pass(SILENCE_MS)
    await b.pass(POLL_MS)
    await b.pass(POLL_MS)
    expect(b.asked).toHaveLength(3)
    expect(b.opened).toHaveLength(1)
    expect(b.asked[2]).toBe('/api/events/news?after=5')
  })
  it('without streams it asks', async () => {
    b = browser(false)
    b.source.start()
    await b.pass(0)
    await b.pass(POLL_MS)
    expect(b.asked).toEqual(['/api/events/news', '/api/events/news?after=5'])
  })
  it('ends with the session, and forgets where it stood', async () => {
    b.source.start()
    b.says('here', '7')
    b.says('end')
    await b.pass(SILENCE_MS * 3)
    expect([b.heard, b.asked]).toEqual([['here', 'ended'], []])
    b.source.start()
    expect(b.opened).toEqual(['/api/events', '/api/events'])
  })
  it('a 401 ends it too', async () => {
    b.source.start()
    b.answers({ status: 401, news: null })
    b.breaks()
    await b.pass(0)
    await b.pass(POLL_MS * 100)
    expect(b.heard).toEqual(['ended'])
    expect(b.asked).toHaveLength(1)
  })
  it('stops when the last tab is gone', async () => {
    b.source.start()
    b.source.stop()
    await b.pass(SILENCE_MS * 10)
    expect(b.asked).toEqual([])
  })
})
