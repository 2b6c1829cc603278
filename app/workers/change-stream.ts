import { browserParts, makeChangeSource, type ChangeMessage } from '../utils/change-source'

/** One worker for all tabs of a browser: it holds the one event stream and hands on what it hears. */
interface SharedScope { onconnect: ((event: MessageEvent) => void) | null }
const scope = globalThis as unknown as SharedScope

const tabs = new Set<MessagePort>()
const source = makeChangeSource(browserParts(true), (message: ChangeMessage) => {
  for (const tab of tabs) tab.postMessage(message)
})

scope.onconnect = ({ ports: [port] }) => {
  if (!port) return
  tabs.add(port)
  port.onmessage = ({ data }: MessageEvent<'start' | 'bye'>) => {
    if (data === 'start') return source.start()
    tabs.delete(port)
    if (tabs.size === 0) source.stop()
  }
}
