import { useLocalStorage } from '@vueuse/core'
import { leftWords, sameLimb, startWarming, timeLeft, type Warming } from '~/utils/warming'

/**
 * The clocks of the limbs that are being warmed, over reloads of the page. They belong to this browser: they say no more
 * than side, limb and time.
 *
 * @example
 * const { running, start, end } = useWarming(studyId)
 */
export function useWarming(studyId: string) {
  const list = useLocalStorage<Warming[]>(`orthodrome-warming-${studyId}`, [], { initOnMounted: true, writeDefaults: false })
  const now = ref(Date.now())
  let timer: ReturnType<typeof setInterval> | undefined
  onMounted(() => timer = setInterval(() => {
    if (list.value.length > 0) now.value = Date.now()
  }, 1000))
  onBeforeUnmount(() => clearInterval(timer))

  const running = computed(() => list.value.map((warming) => {
    const left = timeLeft(warming, now.value)
    return { ...warming, isOver: left <= 0, words: leftWords(left) }
  }))
  function start(warming: Omit<Warming, 'startedAt'>) {
    now.value = Date.now()
    list.value = startWarming(list.value, { ...warming, startedAt: new Date().toISOString() })
  }
  const end = (limb: Pick<Warming, 'segment' | 'side'>) => list.value = list.value.filter(each => !sameLimb(each, limb))
  return { running, start, end }
}
