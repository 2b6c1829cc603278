import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { Role } from '#shared/permissions'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

export interface NewTask {
  kind: string
  subject: string
  subjectId: string
  siteId: string | null
  ownerRole?: Role
  ownerId?: string
  /** Our numbers and what to do; no patient's name. */
  sentence: string
  dueAt?: string
}

/** Something that a person has to do; at a site one open task of a kind for a thing is enough. */
export async function createTask(context: ServiceContext, trx: Trx, { kind, subject, subjectId, siteId, ownerRole, ownerId, sentence, dueAt }: NewTask): Promise<void> {
  const open = await trx.selectFrom('task').select('id').where('kind', '=', kind).where('subjectId', '=', subjectId).where('siteId', 'is', siteId).where('doneAt', 'is', null).executeTakeFirst()
  if (open) return
  const id = randomUUID()
  await trx.insertInto('task').values({ id, kind, subject, subjectId, siteId, ownerId: ownerId ?? null, ownerRole: ownerRole ?? null, sentence, createdAt: now(context), dueAt: dueAt ?? null, doneAt: null, doneBy: null }).execute()
  await recordAuditEvent(context, trx, { name: 'task.made', subject: 'task', subjectId: id, siteId, data: { kind } })
}
