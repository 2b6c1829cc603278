import { changesAfter, latestChange, MOST_CHANGES, type StoredChange } from '#server/database/queries/changes'
import type { ChangeNotice } from '#shared/change-notice'
import type { Actor, ServiceContext } from './context'
import { hearChanges, mayHear } from './hear-changes'
import { actorOf, readSession } from './read-session'

/** One browser that listens. None of these waits: a browser that reads slowly keeps nobody else back. */
export interface Listener {
  sessionId: string
  /** Tells one change; without `seq` it is one that no trail keeps. */
  tell: (notice: ChangeNotice, seq?: number) => void
  /** Too much was missed: everything shown is fetched again. `seq` is where the trail stands. */
  tellAgain: (seq: number) => void
  /** A sign of life, and where the trail stands. */
  tellHere: (seq: number) => void
  /** The session is over: nothing further is told. */
  end: () => void
  /** The server stops: the line breaks, and the browser asks for a new one. */
  hangUp: () => void
}

const LOOK_MS = 250
/** Without news the session is looked at this often, and the line is kept open through proxies. */
const CHECK_MS = 15_000

/**
 * Tells every listening browser what changed, from the audit trail. Before anything is told the session behind the
 * browser is read anew, as at a request: whoever was signed out or deactivated hears nothing further, and a changed role
 * counts at once. Listening never counts as use.
 */
export function makeChangeHub(services: Omit<ServiceContext, 'actor'>) {
  const context: ServiceContext = { ...services, actor: { userId: null, label: 'Orthodrome', holdings: [] } }
  const listeners = new Map<Listener, Actor>()
  let last = 0
  let checkedAt = 0
  let timer: NodeJS.Timeout | undefined
  /** One thing after the other, so that no browser hears a change twice or out of order. */
  let turn: Promise<unknown> = Promise.resolve()
  const inTurn = <T>(act: () => Promise<T>): Promise<T> => {
    const mine = turn.then(act)
    turn = mine.catch(() => undefined)
    return mine
  }

  /** The person behind a listener now; ends it when there is none. */
  async function actorNow(listener: Listener): Promise<Actor | null> {
    const session = await readSession(context, listener.sessionId, true)
    if (session && !session.user.mustEnrol) {
      const actor = actorOf(session.user)
      if (listeners.has(listener)) listeners.set(listener, actor)
      return actor
    }
    listeners.delete(listener)
    listener.end()
    return null
  }

  async function tellStored(listener: Listener, changes: readonly StoredChange[]) {
    const actor = await actorNow(listener)
    if (!actor) return
    if (changes.length > MOST_CHANGES) return listener.tellAgain(last)
    for (const { seq, notice } of changes) if (notice && mayHear(actor, notice)) listener.tell(notice, seq)
    if (changes.length === 0) listener.tellHere(last)
  }

  async function look() {
    const changes = await changesAfter(context.db, last)
    const isDue = context.clock().getTime() - checkedAt >= CHECK_MS
    if (changes.length === 0 && !isDue) return
    checkedAt = context.clock().getTime()
    if (changes.length > 0) last = changes.length > MOST_CHANGES ? await latestChange(context.db) : changes.at(-1)!.seq
    for (const listener of [...listeners.keys()]) await tellStored(listener, changes)
  }

  function lookAgain() {
    clearTimeout(timer)
    if (listeners.size === 0) return
    timer = setTimeout(() => void inTurn(look).catch((error: unknown) => context.log.error({ err: error }, 'Looking for changes failed')).then(lookAgain), LOOK_MS)
    timer.unref()
  }

  /** @param after the number heard last; null for a browser that begins to listen */
  function listen(listener: Listener, after: number | null): Promise<void> {
    return inTurn(async () => {
      if (listeners.size === 0) last = await latestChange(context.db)
      else await look()
      const actor = await actorNow(listener)
      if (!actor) return
      const missed = await hearChanges({ db: context.db, actor }, after === null || after > last ? null : after)
      listeners.set(listener, actor)
      if (missed.again || (after !== null && after > last)) listener.tellAgain(missed.seq)
      for (const notice of missed.changes) listener.tell(notice)
      listener.tellHere(last)
      lookAgain()
    })
  }

  /** What no trail keeps: who is here. Told like everything else, only to those who may hear it. */
  function whisper(notice: ChangeNotice): Promise<void> {
    return inTurn(async () => {
      for (const listener of [...listeners.keys()]) {
        const actor = await actorNow(listener)
        if (actor && mayHear(actor, notice)) listener.tell(notice)
      }
    })
  }

  return {
    listen, whisper, look: () => inTurn(look),
    leave: (listener: Listener) => { listeners.delete(listener) },
    /** Everybody whose browser listens now, each person once, with the roles last seen. */
    present: (): Actor[] => [...new Map([...listeners.values()].map(actor => [actor.userId, actor])).values()],
    close() {
      clearTimeout(timer)
      const all = [...listeners.keys()]
      listeners.clear()
      for (const listener of all) listener.hangUp()
    },
  }
}
export type ChangeHub = ReturnType<typeof makeChangeHub>
