import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { Recipient } from '#server/database/queries/recipients'
import type { ReportVersion } from '#server/database/tables/report-version'
import type { ReportSnapshot } from '#shared/schemas/report'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { newToken } from './keys'
import { moveState, writeStateChange } from './move-state'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'

/** How long a delivery can still be taken back before anything leaves. */
export const holdSeconds = 60

export interface VersionToDeliver { version: ReportVersion, snapshot: ReportSnapshot, siteId: string, patientId: string }

/**
 * One delivery for each recipient, with its mail, in the transaction of the signature. Who cannot be mailed becomes a
 * task for the administrator: nobody is forgotten silently.
 */
export async function queueDeliveries(context: ServiceContext, trx: Trx, made: VersionToDeliver, recipients: readonly Recipient[]): Promise<void> {
  for (const recipient of recipients) {
    if (recipient.reachable) await queueOne(context, trx, made, recipient)
    else await leaveToPeople(context, trx, made, recipient)
  }
}

type State = 'held' | 'given-up'
async function insertDelivery(context: ServiceContext, trx: Trx, { version, snapshot, siteId, patientId }: VersionToDeliver, recipient: Recipient, how: { method: 'encrypted-pdf' | 'collection-link' | 'letter', state: State, reason: string, holdUntil: string | null, tokenHash: string | null }): Promise<string> {
  const id = randomUUID()
  const at = now(context)
  await trx.insertInto('delivery').values({
    id, reportVersionId: version.id, physicianId: recipient.physicianId, practiceId: recipient.practiceId, siteId, address: recipient.email, method: how.method,
    state: how.state, stateSince: at, stateReason: how.reason, holdUntil: how.holdUntil, acknowledgeTokenHash: how.tokenHash, acknowledgedAt: null, sentAt: null, createdAt: at, linkRenewedAt: null,
  }).execute()
  await writeStateChange(context, trx, { subject: 'delivery', id, from: null, to: how.state, reason: how.reason })
  await recordAuditEvent(context, trx, { name: 'delivery.queued', subject: 'delivery', subjectId: id, siteId, patientId, data: { number: snapshot.number, version: snapshot.version, physicianId: recipient.physicianId, method: how.method } })
  return id
}

async function queueOne(context: ServiceContext, trx: Trx, made: VersionToDeliver, recipient: Recipient): Promise<void> {
  const { snapshot } = made
  const token = newToken()
  const holdUntil = new Date(context.clock().getTime() + holdSeconds * 1000).toISOString()
  const deliveryId = await insertDelivery(context, trx, made, recipient, { method: recipient.deliveryMethod, state: 'held', reason: '', holdUntil, tokenHash: context.keys.tokenHash(token) })
  await queueMail(context, trx, {
    template: 'report-ready', toAddress: recipient.email, deliveryId, dueAt: holdUntil,
    data: { reportNumber: snapshot.number, version: snapshot.version, status: snapshot.status, organisation: snapshot.organisation.name, siteName: snapshot.site.name, sitePhone: snapshot.site.phone, acknowledgeToken: token, method: recipient.deliveryMethod },
  })
}

async function leaveToPeople(context: ServiceContext, trx: Trx, made: VersionToDeliver, recipient: Recipient): Promise<void> {
  const deliveryId = await insertDelivery(context, trx, made, recipient, { method: 'letter', state: 'given-up', reason: recipient.because, holdUntil: null, tokenHash: null })
  await createTask(context, trx, { kind: 'deliver-by-hand', subject: 'delivery', subjectId: deliveryId, siteId: made.siteId, ownerRole: 'administrator', sentence: `${made.snapshot.number}, version ${made.snapshot.version}, cannot be mailed to ${recipient.name}, ${recipient.practiceName}: ${recipient.because}. Deliver it another way.` })
}

/** What of the earlier versions has not left yet must not arrive after the new one. */
export async function withdrawUnsent(context: ServiceContext, trx: Trx, reportId: string, reason: string): Promise<void> {
  const waiting = await trx.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId')
    .select('delivery.id').where('reportVersion.reportId', '=', reportId).where('delivery.state', 'in', ['held', 'queued', 'failed', 'given-up']).execute()
  for (const { id } of waiting) {
    await moveState(context, trx, { subject: 'delivery', id, from: ['held', 'queued', 'failed', 'given-up'], to: 'withdrawn', reason })
    await trx.updateTable('outboxMail').set({ state: 'withdrawn' }).where('deliveryId', '=', id).execute()
    await trx.updateTable('task').set({ doneAt: now(context), doneBy: context.actor.userId, resolution: reason }).where('subjectId', '=', id).where('doneAt', 'is', null).execute()
  }
}
