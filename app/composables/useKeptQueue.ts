import type { ShallowRef } from 'vue'
import { whenFree } from '~/utils/when-free'
import { newId } from '~/utils/new-id'
import { mergeKept, unsavedCells, type SaveQueue } from '~/utils/save-queue'

const PATIENCE_MS = 3_000

/**
 * Keeps a queue on this device, sealed, at every change, the newest state last; brings back what tabs that are gone left
 * of the same study.
 *
 * @param number the study's number, for the list of what is not stored yet
 * @param onRestored called with the queue that was brought back
 */
export function useKeptQueue(studyId: string, number: string, queue: ShallowRef<SaveQueue>, onRestored: (kept: SaveQueue) => void) {
  const { $offline: offline } = useNuxtApp()
  const tab = newId()
  /** The state that lies on this device now. */
  const written = shallowRef<SaveQueue | null>(null)
  const isKept = computed(() => written.value === queue.value)
  let writing: Promise<void> | undefined
  let letGo: () => void = () => undefined

  async function writeNow() {
    while (written.value !== queue.value) {
      await whenFree()
      const state = queue.value
      const store = await offline?.store()
      if (!store) return
      await store.keep({ studyId, number, tab, queue: state })
      written.value = state
    }
  }
  /** Resolves when the present state lies on this device, or cannot. */
  function write(): Promise<void> {
    writing ??= writeNow().catch(() => undefined).finally(() => writing = undefined)
    return writing
  }

  async function restore() {
    const store = await offline?.store()
    for (const kept of await store?.queues() ?? []) {
      if (kept.studyId !== studyId || kept.tab === tab) continue
      await offline?.withTab(kept.tab, async () => {
        queue.value = mergeKept(queue.value, kept.queue)
        onRestored(kept.queue)
        await write()
        await store?.drop(kept)
      })
    }
  }
  /** While this tab lives, nobody else sends its queue. */
  const alive = () => void navigator.locks?.request(`orthodrome-tab-${tab}`, () => new Promise<void>(done => letGo = done))

  let ready: Promise<unknown> = Promise.resolve()
  onMounted(() => {
    alive()
    ready = Promise.race([restore().catch(() => undefined), new Promise(done => setTimeout(done, PATIENCE_MS))])
  })
  watch(queue, () => void write(), { flush: 'sync' })

  return {
    isKept,
    /** Before anything is sent: what was left is back, and what goes out is kept with the ids under which a repeat is recognised. */
    before: async () => {
      await ready
      await Promise.race([write(), new Promise(done => setTimeout(done, PATIENCE_MS))])
    },
    /** The page is left: whatever is still unsent belongs to whoever finds it. */
    leave: async () => {
      await write()
      letGo()
      if (unsavedCells(queue.value).length > 0) void offline?.sendLeft()
    },
  }
}
