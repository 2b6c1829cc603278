import type { StudyView } from '#shared/schemas/bench'
import { whenFree } from '~/utils/when-free'

const PAUSE_MS = 1_000

/**
 * Keeps the study on this device as it stands, sealed, and has its page come back without the server.
 *
 * @param changed what a new copy follows: a fresh view, an acknowledged cell
 * @param copy the study with everything that was acknowledged; null while a cell is being typed into
 */
export function useKeptStudy(changed: () => unknown, copy: () => StudyView | null) {
  const { $offline: offline } = useNuxtApp()
  const { user } = useSession()
  let timer: ReturnType<typeof setTimeout> | undefined

  async function keep() {
    const view = copy()
    if (!view) return later()
    const store = await offline?.store()
    if (user.value && store?.owner === user.value.id) await store.keepStudy({ user: user.value, view }).catch(() => undefined)
  }
  function later() {
    clearTimeout(timer)
    timer = setTimeout(() => void keep(), PAUSE_MS)
  }
  onMounted(() => {
    void offline?.register()
    void whenFree().then(keep)
  })
  watch(changed, later)
  onBeforeUnmount(() => clearTimeout(timer))
}
