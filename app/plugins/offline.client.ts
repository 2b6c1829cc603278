import type { SaveCell, SavedCell } from '#shared/schemas/bench'
import { newId } from '~/utils/new-id'
import { deviceId, openOfflineDatabase, type OfflineDatabase } from '~/utils/offline/database'
import { importKey } from '~/utils/offline/seal'
import { makeOfflineStore, type KeptQueue, type OfflineStore } from '~/utils/offline/store'
import { sendQueue, unsavedCells, type SaveQueue } from '~/utils/save-queue'

const SCOPE = '/bench/'
/** A worker that is asked nothing sleeps after half a minute and forgets: it is told again before. */
const HOLD_MS = 20_000
const ASK_MS = 1_500

/**
 * What is typed stays on this device, sealed, until the server has it. The key comes from the server for the person who
 * is signed in, and lives in memory only: here, and in the service worker, for a page that is loaded anew while the
 * server is away.
 */
export default defineNuxtPlugin(() => {
  const { user, may } = useSession()
  const person = usePersonMark()
  /** '' while it works; else why nothing is kept on this device. */
  const offBecause = ref(globalThis.crypto?.subtle && navigator.locks && globalThis.indexedDB ? '' : 'offline is off: this address has no TLS')
  const left = ref<(Pick<KeptQueue, 'studyId' | 'number' | 'tab'> & { count: number })[]>([])
  let database: Promise<OfflineDatabase> | undefined
  let current: OfflineStore | null = null
  let opening: Promise<OfflineStore | null> | undefined
  /** The worker holds the key while the session lasts. */
  let holds = true

  const worker = async () => (await navigator.serviceWorker?.getRegistration(SCOPE))?.active ?? null
  const open = () => database ??= openOfflineDatabase()

  async function keyFromServer(db: OfflineDatabase): Promise<OfflineStore | null> {
    const owner = user.value?.id
    if (!owner || !may('study.record')) return null
    const device = await deviceId(db, newId)
    const { key } = await $fetch<{ key: string }>('/api/offline/key', { query: { device }, headers: person(), retry: 0, timeout: 10_000 })
    // The mark has it refused when somebody else signed in in another tab: nothing is sealed under a stranger's key.
    return user.value?.id === owner ? makeOfflineStore(db, owner, await importKey(key)) : null
  }
  async function openStore(): Promise<OfflineStore | null> {
    try {
      current = await keyFromServer(await open())
      void hold()
      return current
    }
    catch (error) {
      // A refused database, not a refused request.
      if (error instanceof DOMException) offBecause.value = 'offline is off: this browser keeps no data'
      return null
    }
  }
  /** null while the server cannot be asked for the key, and where offline is off. */
  async function store(): Promise<OfflineStore | null> {
    if (offBecause.value) return null
    if (current && (!user.value || current.owner === user.value.id)) return current
    opening ??= openStore().finally(() => opening = undefined)
    return opening
  }

  /** Without the server: the key from the worker's memory, if this person had the page open a moment ago. */
  async function storeFromWorker(): Promise<OfflineStore | null> {
    const active = offBecause.value ? null : await worker()
    if (!active) return null
    const channel = new MessageChannel()
    const answer = new Promise<{ owner: string, key: CryptoKey } | null>((done) => {
      channel.port1.onmessage = ({ data }) => done(data as { owner: string, key: CryptoKey } | null)
      setTimeout(() => done(null), ASK_MS)
    })
    active.postMessage({ type: 'ask' }, [channel.port2])
    const held = await answer
    current = held && makeOfflineStore(await open(), held.owner, held.key)
    return current
  }
  async function hold() {
    if (current && holds) (await worker())?.postMessage({ type: 'hold', owner: current.owner, key: current.key })
  }

  /** Does something with the queue of a tab that is gone, in one tab only; a queue that is in use is left alone. */
  async function withTab(tab: string, act: () => Promise<void>): Promise<void> {
    await navigator.locks.request(`orthodrome-tab-${tab}`, { ifAvailable: true }, async lock => lock ? act() : undefined)
  }

  async function sendOne(own: OfflineStore, kept: KeptQueue) {
    const put = async (cells: SaveCell[]) => (await $fetch<{ cells: SavedCell[] }>(`/api/studies/${kept.studyId}/cells`, { method: 'PUT', body: { cells }, retry: 0, timeout: 20_000, headers: { ...person(), 'x-background': '1' } })).cells
    let queue = kept.queue
    const keep = async (next: SaveQueue) => {
      queue = next
      await own.keep({ ...kept, queue })
    }
    // Without an answer, and when the study takes nothing more, it stays as it was kept.
    await sendQueue(queue, put, newId, keep).then(keep).catch(() => undefined)
    const count = unsavedCells(queue).length
    if (count > 0) left.value = [...left.value, { studyId: kept.studyId, number: kept.number, tab: kept.tab, count }]
  }
  let sending: Promise<void> | undefined
  /** Sends what tabs that are gone have left. What cannot be sent by itself stays and is listed. */
  function sendLeft(): Promise<void> {
    sending ??= (async () => {
      const own = user.value ? await store() : null
      left.value = []
      // A study that is open here takes its own back, and shows it.
      const elsewhere = (await own?.queues() ?? []).filter(kept => !window.location.href.includes(kept.studyId))
      for (const kept of elsewhere) await withTab(kept.tab, () => sendOne(own!, kept))
    })().catch(() => undefined).finally(() => sending = undefined)
    return sending
  }

  /** The session is over: a page that is loaded anew shows nothing. What was not sent stays, sealed. */
  async function forget() {
    holds = false
    const active = await worker()
    active?.postMessage({ type: 'forget' })
    await current?.dropStudy()
  }

  /** The page comes back without the server; only the bench asks for it. */
  async function register() {
    const registration = offBecause.value ? undefined : await navigator.serviceWorker?.register('/sw.js', { scope: SCOPE }).catch(() => undefined)
    // A worker that is just being installed is told as soon as it can listen, not at the next turn of the clock.
    const coming = registration?.installing ?? registration?.waiting
    coming?.addEventListener('statechange', () => void hold())
    await hold()
    void navigator.storage?.persist?.().catch(() => undefined)
  }

  if (!offBecause.value) setInterval(() => void hold(), HOLD_MS)
  window.addEventListener('online', () => void sendLeft())
  useNuxtApp().$changes?.onMessage((message) => {
    if (message.type === 'here') holds = true
    if (message.type === 'here' && left.value.length > 0) void sendLeft()
    if (message.type === 'ended') void forget()
  })
  watch(() => user.value?.id, () => void sendLeft(), { immediate: true })

  return { provide: { offline: { offBecause, left, store, storeFromWorker, withTab, sendLeft, forget, register } } }
})
