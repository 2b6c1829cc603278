import type { ChangeNews, ChangeNotice } from '#shared/change-notice'

/** What a tab is told. `again`: fetch everything shown anew. `ended`: the session is over. `here`: the line stands. */
export type ChangeMessage = { type: 'change', notice: ChangeNotice } | { type: 'again' } | { type: 'ended' } | { type: 'here' }

/** The few things a browser gives; tests hand in their own. */
export interface SourceParts {
  /** undefined where no stream can be held open: then it is asked for. */
  openStream?: (path: string) => Pick<EventSource, 'addEventListener' | 'close' | 'readyState'> & { onerror: unknown }
  ask: (path: string) => Promise<{ status: number, news: ChangeNews | null }>
  later: (act: () => void, milliseconds: number) => ReturnType<typeof setTimeout>
  never: (timer: ReturnType<typeof setTimeout> | undefined) => void
}

export const POLL_MS = 5_000
/** The server gives a sign of life every 15 seconds; a proxy that holds everything back gives none. */
export const SILENCE_MS = 40_000
const STREAM_AGAIN_MS = 60_000
/** EventSource.CLOSED, which a test has not. */
const CLOSED = 2

/**
 * The one line to the server of this browser: a stream of events, and where that does not come through, a question every
 * few seconds, with the stream tried again now and then. It goes on from the last number seen.
 *
 * @example
 * const source = makeChangeSource(parts, message => tabs.forEach(tab => tab.postMessage(message)))
 * source.start()
 */
export function makeChangeSource(parts: SourceParts, tell: (message: ChangeMessage) => void) {
  let stream: ReturnType<NonNullable<SourceParts['openStream']>> | undefined
  let last: number | null = null
  let running = false
  /** A stream came through once: a break is then a break, and no proxy that holds everything back. */
  let worked = false
  let silence: ReturnType<typeof setTimeout> | undefined
  let poll: ReturnType<typeof setTimeout> | undefined
  let reopen: ReturnType<typeof setTimeout> | undefined
  const path = (base: string) => last === null ? base : `${base}?after=${last}`

  function heard(event: Event) {
    const id = Number((event as MessageEvent).lastEventId)
    if ((event as MessageEvent).lastEventId !== '' && Number.isSafeInteger(id)) last = id
    parts.never(silence)
    silence = parts.later(blocked, SILENCE_MS)
  }

  function openStream() {
    if (!running || !parts.openStream) return
    stream = parts.openStream(path('/api/events'))
    silence = parts.later(blocked, SILENCE_MS)
    stream.addEventListener('here', (event) => {
      heard(event)
      worked = true
      tell({ type: 'here' })
    })
    stream.addEventListener('change', (event) => {
      heard(event)
      tell({ type: 'change', notice: JSON.parse((event as MessageEvent<string>).data) as ChangeNotice })
    })
    stream.addEventListener('again', (event) => {
      heard(event)
      tell({ type: 'again' })
    })
    stream.addEventListener('end', () => end())
    // While it connects again by itself, with Last-Event-ID, it is left alone; refused, it is closed.
    stream.onerror = () => {
      if (stream?.readyState === CLOSED) blocked()
    }
  }

  /** The stream broke or brings nothing: ask instead, and try the stream again later. */
  function blocked() {
    if (!running) return
    closeStream()
    parts.never(poll)
    parts.never(reopen)
    reopen = parts.later(() => {
      stopAsking()
      openStream()
    }, STREAM_AGAIN_MS)
    void ask()
  }

  async function ask() {
    parts.never(poll)
    const { status, news } = await parts.ask(path('/api/events/news')).catch(() => ({ status: 0, news: null }))
    if (!running) return
    if (status === 401 || status === 403) return end()
    if (news) {
      last = news.seq
      if (news.again) tell({ type: 'again' })
      for (const notice of news.changes) tell({ type: 'change', notice })
      tell({ type: 'here' })
      if (worked && parts.openStream) {
        stopAsking()
        return openStream()
      }
    }
    if (!stream) poll = parts.later(() => void ask(), POLL_MS)
  }

  function closeStream() {
    parts.never(silence)
    stream?.close()
    stream = undefined
  }
  function stopAsking() {
    parts.never(poll)
    parts.never(reopen)
    reopen = undefined
  }
  function stop() {
    running = false
    closeStream()
    stopAsking()
  }
  function end() {
    stop()
    last = null
    worked = false
    tell({ type: 'ended' })
  }

  return {
    start() {
      if (running) return
      running = true
      if (parts.openStream) openStream()
      else void ask()
    },
    stop,
  }
}

/** @param stream false where the line belongs to one tab and no connection may be held for it */
export function browserParts(stream: boolean): SourceParts {
  return {
    ...(stream && typeof EventSource === 'function' ? { openStream: (path: string) => new EventSource(path) } : {}),
    ask: async (path) => {
      const response = await fetch(path, { headers: { 'x-background': '1' }, cache: 'no-store' })
      return { status: response.status, news: response.ok ? await response.json() as ChangeNews : null }
    },
    later: (act, milliseconds) => setTimeout(act, milliseconds),
    never: timer => clearTimeout(timer),
  }
}
