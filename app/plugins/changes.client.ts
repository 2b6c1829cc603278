import { browserParts, makeChangeSource, type ChangeMessage } from '~/utils/change-source'
import { whenQuiet } from '~/utils/when-quiet'

const QUIET_MS = 2_000

/**
 * Connects this tab to the browser's one event stream while somebody is signed in: through a worker that all tabs share,
 * so that one connection is held whatever is open; where there is none (some tablets) the tab asks every few seconds.
 * The page's own work goes first; what happened since its server read who is signed in is asked for afterwards.
 */
export default defineNuxtPlugin(() => {
  const { user, may } = useSession()
  const signedOut = useSignedOut()
  const heard = new Set<(message: ChangeMessage) => void>()
  const { ask } = browserParts(false)

  function tell(message: ChangeMessage) {
    if (message.type === 'ended' && user.value) signedOut.value = true
    for (const act of heard) act(message)
  }
  function connect() {
    if (typeof SharedWorker !== 'function') return makeChangeSource(browserParts(false), tell)
    const { port } = new SharedWorker(new URL('../workers/change-stream.ts', import.meta.url), { type: 'module', name: 'orthodrome-changes' })
    port.onmessage = ({ data }: MessageEvent<ChangeMessage>) => tell(data)
    return { start: () => port.postMessage('start'), stop: () => port.postMessage('bye') }
  }
  /** What happened between the answer that made the page and the line. */
  async function catchUp(after: number) {
    const { news } = await ask(`/api/events/news?after=${after}`)
    if (news?.again) tell({ type: 'again' })
    for (const notice of news?.changes ?? []) tell({ type: 'change', notice })
  }
  let line: ReturnType<typeof connect> | undefined
  async function start() {
    if (!user.value || user.value.mustEnrol || !may('changes.hear')) return
    // Read before anything the page shows was fetched: what changed while it was on its way is told too.
    const before = user.value.changesUpTo
    await whenQuiet(QUIET_MS)
    line ??= connect()
    line.start()
    await catchUp(before).catch(() => undefined)
  }
  watch(() => user.value?.id, () => void start(), { immediate: true })
  watch(signedOut, out => out || void start())
  // A page that comes back from the browser's memory of pages listens anew.
  window.addEventListener('pageshow', event => event.persisted && void start())
  window.addEventListener('pagehide', () => {
    line?.stop()
    line = undefined
  })

  const onMessage = (act: (message: ChangeMessage) => void) => {
    heard.add(act)
    return () => heard.delete(act)
  }
  return { provide: { changes: { onMessage } } }
})
