import type { Database, Trx } from '#server/database/connection'
import type { ViewEvent } from '#server/database/tables/view-event'
import { now, type ServiceContext } from './context'
import { CHAIN_START, headProof, setHead } from './record-audit-event'

export const VIEW_HEAD = 'view-head'

export interface NewView {
  subject: string
  subjectId: string
  siteId?: string | null
  patientId?: string | null
  /** The stated reason, where one was asked for. */
  because?: string
}
type Waiting = Omit<ViewEvent, 'seq' | 'previousMac' | 'mac'>

/** At most this long, and at most so many views, are lost when the process is killed; a clean stop loses none. */
const WRITE_AFTER_MS = 2_000
const WRITE_AT = 200
const buffers = new WeakMap<Database, { waiting: Waiting[], timer: NodeJS.Timeout | null }>()

/** The text that a link's HMAC covers. */
export function viewLinkText(view: Omit<ViewEvent, 'mac'>): string {
  return JSON.stringify([view.seq, view.at, view.actorId, view.siteId, view.subject, view.subjectId, view.patientId, view.because, view.previousMac])
}

/**
 * Notes that someone looked at a record. Views have a chain of their own and are written in batches, so that reading
 * costs no disk write. The same look twice within one batch is one view.
 */
export function recordView(context: ServiceContext, view: NewView): void {
  if (!context.actor.userId) return
  const buffer = bufferOf(context.db)
  const { subject, subjectId, because = context.actor.emergency?.reason ?? '' } = view
  const actorId = context.actor.userId
  if (buffer.waiting.some(other => other.actorId === actorId && other.subject === subject && other.subjectId === subjectId && other.because === because)) return
  buffer.waiting.push({ at: now(context), actorId, siteId: view.siteId ?? null, subject, subjectId, patientId: view.patientId ?? null, because })
  if (buffer.waiting.length >= WRITE_AT) void writeSoon(context)
  else buffer.timer ??= setTimeout(() => void writeSoon(context), WRITE_AFTER_MS).unref()
}

/** Writes what waits, in one transaction; also called when the server stops. */
export async function flushViews(context: ServiceContext): Promise<number> {
  const buffer = bufferOf(context.db)
  if (buffer.timer) clearTimeout(buffer.timer)
  buffer.timer = null
  const batch = buffer.waiting.splice(0)
  if (batch.length === 0) return 0
  try {
    await context.db.transaction().execute(trx => writeBatch(context, trx, batch))
  }
  catch (error) {
    buffer.waiting.unshift(...batch)
    throw error
  }
  return batch.length
}

async function writeSoon(context: ServiceContext): Promise<void> {
  try {
    await flushViews(context)
  }
  catch (error) {
    context.log.error({ code: (error as { code?: string }).code }, 'Views could not be written yet')
  }
}

async function writeBatch(context: ServiceContext, trx: Trx, batch: Waiting[]): Promise<void> {
  let last = await trx.selectFrom('viewEvent').select(['seq', 'mac']).orderBy('seq', 'desc').limit(1).executeTakeFirst() ?? { seq: 0, mac: CHAIN_START }
  for (const view of batch) {
    const link = { ...view, seq: last.seq + 1, previousMac: last.mac }
    const mac = context.keys.viewMac(viewLinkText(link))
    await trx.insertInto('viewEvent').values({ ...link, mac }).execute()
    last = { seq: link.seq, mac }
  }
  await setHead(trx, VIEW_HEAD, headProof(context.keys.viewMac, last.seq, last.mac))
}

function bufferOf(db: Database) {
  let buffer = buffers.get(db)
  if (!buffer) buffers.set(db, buffer = { waiting: [], timer: null })
  return buffer
}
