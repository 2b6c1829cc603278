import { randomUUID } from 'node:crypto'
import { policyInForce } from '#server/database/queries/policies'
import { retentionPage } from '#server/database/queries/retention'
import { DomainError } from '#shared/errors'
import type { Page } from '#shared/schemas/common'
import type { RetentionRow } from '#shared/schemas/retention'
import { now, type ServiceContext } from './context'
import { organisationDay } from './organisation-day'
import { recordAuditEvent } from './record-audit-event'

/**
 * What is past the years of the retention policy, and what is on hold. The list is as far as the program goes: signed
 * versions, their PDFs and both chains are guarded by the database against every removal and are what `verify` compares,
 * so taking content out would look like tampering and could not be told from it.
 */
export async function listRetention(context: ServiceContext, query: { show: 'past' | 'held', page: number, pageSize: number }): Promise<Page<RetentionRow>> {
  const today = await organisationDay(context)
  const { body: policy } = await policyInForce(context.db, 'retention', null, today)
  const { rows, total } = await retentionPage(context.db, { ...query, today, policy })
  return {
    rows: rows.map(({ holdId, reason, setAt, setBy, child, ...row }) => ({ ...row, child: child === 1, hold: holdId ? { id: holdId, reason: reason ?? '', setAt: setAt ?? '', setBy: setBy ?? '' } : null })),
    total, page: query.page, pageSize: query.pageSize,
  }
}

/** Keeps a record however old it is. @throws DomainError 'not-found' · 'wrong-state' when it is on hold already */
export async function setLegalHold(context: ServiceContext, { patientId, reason }: { patientId: string, reason: string }): Promise<{ id: string }> {
  const setBy = context.actor.userId
  if (!setBy) throw new DomainError('not-signed-in')
  return await context.db.transaction().execute(async (trx) => {
    const patient = await trx.selectFrom('patient').select('id').where('id', '=', patientId).where('mergedInto', 'is', null).executeTakeFirst()
    if (!patient) throw new DomainError('not-found')
    const open = await trx.selectFrom('legalHold').select('id').where('patientId', '=', patientId).where('liftedAt', 'is', null).executeTakeFirst()
    if (open) throw new DomainError('wrong-state', { message: 'This record is on hold already.' })
    const id = randomUUID()
    await trx.insertInto('legalHold').values({ id, patientId, reason, setBy, setAt: now(context), liftedBy: null, liftedAt: null }).execute()
    await recordAuditEvent(context, trx, { name: 'retention.hold-set', subject: 'patient', subjectId: patientId, patientId, data: { holdId: id } })
    return { id }
  })
}

/** Lifts a hold; whoever set it is not the one who lifts it. @throws DomainError 'not-found' · 'not-allowed' */
export async function liftLegalHold(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const hold = await trx.selectFrom('legalHold').selectAll().where('id', '=', id).where('liftedAt', 'is', null).executeTakeFirst()
    if (!hold) throw new DomainError('not-found')
    if (hold.setBy === context.actor.userId) throw new DomainError('not-allowed', { message: 'A hold is lifted by another person than the one who set it.' })
    await trx.updateTable('legalHold').set({ liftedBy: context.actor.userId, liftedAt: now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'retention.hold-lifted', subject: 'patient', subjectId: hold.patientId, patientId: hold.patientId, data: { holdId: id } })
  })
}
