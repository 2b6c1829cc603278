import { randomUUID } from 'node:crypto'
import { DomainError } from '#shared/errors'
import type { DelegateInput } from '#shared/schemas/directory'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { changeShared } from './shared-directory'

/**
 * Names somebody of the practice who may be told its passphrase and collect its reports.
 * @throws DomainError 'not-found' when the practice is closed or gone · 'not-allowed' as `changeShared`
 */
export async function addDelegate(context: ServiceContext, practiceId: string, input: DelegateInput): Promise<{ id: string }> {
  const createdBy = context.actor.userId
  if (!createdBy) throw new DomainError('not-signed-in')
  return await context.db.transaction().execute(async (trx) => {
    const practice = await trx.selectFrom('practice').select('id').where('id', '=', practiceId).where('closedAt', 'is', null).executeTakeFirst()
    if (!practice) throw new DomainError('not-found')
    await changeShared(context, trx, practiceId, 'Who may collect for a practice')
    const id = randomUUID()
    await trx.insertInto('practiceDelegate').values({ id, practiceId, ...input, createdAt: now(context), createdBy, endedAt: null, endedBy: null }).execute()
    await recordAuditEvent(context, trx, { name: 'practice.delegate-added', subject: 'practice', subjectId: practiceId, data: { delegateId: id } })
    return { id }
  })
}

/** Nothing is told to them any more. @throws DomainError 'not-found' */
export async function endDelegate(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const ended = await trx.updateTable('practiceDelegate').set({ endedAt: now(context), endedBy: context.actor.userId }).where('id', '=', id).where('endedAt', 'is', null).returning('practiceId').executeTakeFirst()
    if (!ended) throw new DomainError('not-found')
    await changeShared(context, trx, ended.practiceId, 'Who may collect for a practice')
    await recordAuditEvent(context, trx, { name: 'practice.delegate-ended', subject: 'practice', subjectId: ended.practiceId, data: { delegateId: id } })
  })
}
