import type { ChangeKind, ChangeNotice } from '#shared/change-notice'
import type { ChangeMessage } from '~/utils/change-source'

interface Wanted { kind: ChangeKind, /** one thing only */ id?: () => string, /** further choice */ only?: (notice: ChangeNotice) => boolean }
const TOGETHER_MS = 200

/**
 * Calls `act` when something changed, whoever changed it and wherever: what happens together is told together. With an
 * empty list too much was missed, and everything shown should be fetched. The notices hold ids and kinds only. What is
 * fetched because of it must not count as use: give `background: true` to `useApi`.
 *
 * @example
 * useEventStream({ kind: 'referral' }, () => refresh())
 * useEventStream({ kind: 'study', id: () => props.studyId }, notices => …)
 */
export function useEventStream(wanted: Wanted, act: (notices: ChangeNotice[]) => void) {
  let waiting: ChangeNotice[] = []
  let timer: ReturnType<typeof setTimeout> | undefined
  const isWanted = (notice: ChangeNotice) => notice.kind === wanted.kind && (!wanted.id || notice.id === wanted.id()) && (wanted.only?.(notice) ?? true)

  function onMessage(message: ChangeMessage) {
    if (message.type === 'again') return flush()
    if (message.type !== 'change' || !isWanted(message.notice)) return
    waiting.push(message.notice)
    timer ??= setTimeout(flush, TOGETHER_MS)
  }
  function flush() {
    clearTimeout(timer)
    timer = undefined
    const notices = waiting
    waiting = []
    act(notices)
  }
  let leave: (() => void) | undefined
  onMounted(() => leave = useNuxtApp().$changes?.onMessage(onMessage))
  onBeforeUnmount(() => {
    clearTimeout(timer)
    leave?.()
  })
}
