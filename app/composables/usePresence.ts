import type { PersonHere } from '#shared/schemas/presence'
import type { CellAddress } from '~/utils/grid-moves'
import { newId } from '~/utils/new-id'

const AGAIN_MS = 10_000
const MOVED_MS = 500

/**
 * Who else has this study open, and where they stand in it. Says so for this page too; none of it counts as use.
 * @param at the cell that the cursor is in
 */
export function usePresence(studyId: string, at: Ref<CellAddress | null>) {
  const others = ref<PersonHere[]>([])
  const tab = newId()
  let timer: ReturnType<typeof setTimeout> | undefined

  async function say() {
    clearTimeout(timer)
    const body = { tab, runId: at.value?.runId ?? null, rowId: at.value?.rowId ?? null, field: at.value?.field ?? null }
    others.value = await $fetch<PersonHere[]>(`/api/studies/${studyId}/presence`, { method: 'PUT', body, retry: 0, headers: { 'x-background': '1' } }).catch(() => others.value)
    later(AGAIN_MS)
  }
  function later(milliseconds: number) {
    clearTimeout(timer)
    timer = setTimeout(() => void say(), milliseconds)
  }
  /** `keepalive` lets the request outlive a closed tab; where it does not, silence says the same a little later. */
  function leave() {
    clearTimeout(timer)
    void fetch(`/api/studies/${studyId}/presence`, { method: 'PUT', keepalive: true, headers: { 'content-type': 'application/json', 'x-background': '1' }, body: JSON.stringify({ tab, leaving: true }) }).catch(() => undefined)
  }

  watch(at, () => later(MOVED_MS))
  useEventStream({ kind: 'study', id: () => studyId, only: notice => notice.what === 'presence' }, () => later(MOVED_MS))
  onMounted(() => {
    void say()
    window.addEventListener('pagehide', leave)
  })
  onBeforeUnmount(() => {
    window.removeEventListener('pagehide', leave)
    leave()
  })
  return others
}
