import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { changeShared, handOverUnderWay } from './shared-directory'

/**
 * Closes a practice: nothing is sent there any more and its desks are shut; what is under way becomes tasks.
 * @throws DomainError 'not-found' · 'wrong-state' when it is closed · 'not-allowed' as `changeShared`
 */
export async function closePractice(context: ServiceContext, id: string, reason: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const practice = await trx.selectFrom('practice').select('closedAt').where('id', '=', id).executeTakeFirst()
    if (!practice) throw new DomainError('not-found')
    if (practice.closedAt !== null) throw new DomainError('wrong-state')
    await changeShared(context, trx, id, 'That a practice is closed')
    await trx.updateTable('practice').set({ closedAt: now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'practice.closed', subject: 'practice', subjectId: id, data: { reason } })
    for (const physician of await trx.selectFrom('physician').select(['id', 'name']).where('practiceId', '=', id).execute()) await handOverUnderWay(context, trx, physician, 'the practice closed')
  })
}

/** Closed by mistake: it is open again, and reports are sent there as before. @throws DomainError 'wrong-state' */
export async function reopenPractice(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    await changeShared(context, trx, id, 'That a practice is open again')
    const done = await trx.updateTable('practice').set({ closedAt: null }).where('id', '=', id).where('closedAt', 'is not', null).executeTakeFirst()
    if (done.numUpdatedRows !== 1n) throw new DomainError('wrong-state')
    await recordAuditEvent(context, trx, { name: 'practice.reopened', subject: 'practice', subjectId: id, data: {} })
  })
}
