/**
 * The present moment in milliseconds, the same on the server and in the first paint of the browser, then
 * moving on every half minute. One timer for each component that shows a clock.
 */
export function useNow() {
  const now = useState('now', () => Date.now())
  let timer: ReturnType<typeof setInterval> | undefined
  onMounted(() => {
    now.value = Date.now()
    timer = setInterval(() => now.value = Date.now(), 30_000)
  })
  onBeforeUnmount(() => clearInterval(timer))
  return now
}
