const NAME = 'before-idle'
const MOST_MS = 3000
interface Waits { waits: Promise<unknown>[] }

/**
 * What a page stores before an unattended workstation is signed out, so that typing is not lost with it.
 *
 * @example
 * useBeforeIdle(() => referral.save())
 */
export function useBeforeIdle(act: () => Promise<unknown>) {
  const listen = (event: Event) => (event as CustomEvent<Waits>).detail.waits.push(act())
  onMounted(() => window.addEventListener(NAME, listen))
  onBeforeUnmount(() => window.removeEventListener(NAME, listen))
}

/** Lets every page store what it has; goes on after three seconds even if one does not answer. */
export async function storeBeforeIdle() {
  const waits: Promise<unknown>[] = []
  window.dispatchEvent(new CustomEvent<Waits>(NAME, { detail: { waits } }))
  await Promise.race([Promise.allSettled(waits), new Promise(done => setTimeout(done, MOST_MS))])
}

/** True while the page is left because nobody is there: nothing may then ask whether to stay, with a patient on the screen. */
export function useLeavingIdle() {
  return useState('leaving-idle', () => false)
}
