import { createEventStream, getHeader } from 'h3'
import * as z from 'zod'
import { hubOf } from '#server/utils/change-hub'
import { defineApiHandler } from '#server/utils/api-handler'
import { requestSessionId } from '#server/utils/request-session'
import { servicesOf } from '#server/utils/services'
import { DomainError } from '#shared/errors'

/**
 * The event stream: "something changed", in ids and kinds (`ChangeNotice`), with the number in the audit trail as the
 * event's id, so that `Last-Event-ID` goes on where the line broke. Listening does not count as use.
 */
export default defineApiHandler({
  allow: 'changes.hear',
  query: z.object({ after: z.coerce.number().int().min(0).optional() }),
  handle: async ({ event, query }) => {
    const sessionId = await requestSessionId(event)
    if (!sessionId) throw new DomainError('not-signed-in')
    const hub = hubOf(servicesOf(event))
    const stream = createEventStream(event)
    /** A browser that is gone is taken off the list by the close of its line, not by a failed write. */
    const push = (name: string, data: unknown, seq?: number) => void stream.push({ event: name, data: JSON.stringify(data), ...(seq === undefined ? {} : { id: String(seq) }) }).catch(() => undefined)
    const listener = {
      sessionId,
      tell: (notice: object, seq?: number) => push('change', notice, seq),
      tellAgain: (seq: number) => push('again', {}, seq),
      tellHere: (seq: number) => push('here', {}, seq),
      hangUp: () => void stream.close().catch(() => undefined),
      end: () => void stream.push({ event: 'end', data: '{}' }).finally(() => stream.close()).catch(() => undefined),
    }
    event.node.res.once('close', () => hub.leave(listener))
    const answer = stream.send()
    const last = Number(getHeader(event, 'last-event-id') ?? query.after ?? Number.NaN)
    await hub.listen(listener, Number.isSafeInteger(last) ? last : null)
    return answer
  },
})
