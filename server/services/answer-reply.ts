import type { Database } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { ReplyView } from '#shared/schemas/delivery'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

export async function siteOfReply(db: Database, id: string): Promise<string | null> {
  return (await db.selectFrom('deliveryReply').innerJoin('delivery', 'delivery.id', 'deliveryReply.deliveryId').select('delivery.siteId').where('deliveryReply.id', '=', id).executeTakeFirst())?.siteId ?? null
}

const replies = (db: Database) => db.selectFrom('deliveryReply').innerJoin('delivery', 'delivery.id', 'deliveryReply.deliveryId').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId')
  .innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId').innerJoin('physician', 'physician.id', 'delivery.physicianId').innerJoin('practice', 'practice.id', 'delivery.practiceId').leftJoin('user', 'user.id', 'deliveryReply.answeredBy')

/** What recipients wrote about any version of this report, the latest first. */
export async function repliesOfReport(context: ServiceContext, reportId: string): Promise<ReplyView[]> {
  return await replies(context.db).select(['deliveryReply.id', 'report.id as reportId', 'reportVersion.version', 'words', 'fromName', 'physician.name as recipient', 'practice.name as practiceName', 'practice.town', 'practice.phone', 'deliveryReply.at', 'answer', 'answeredAt', 'user.name as answeredBy'])
    .where('report.id', '=', reportId).orderBy('deliveryReply.at', 'desc').execute()
}

/**
 * Notes what was answered; the task is done with it. The recipient's page says that it was answered, never what.
 * @throws DomainError 'not-found', 'wrong-state' when it was answered already
 */
export async function answerReply(context: ServiceContext, { id, answer }: { id: string, answer: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const reply = await replies(trx).select(['deliveryReply.answeredAt', 'delivery.id as deliveryId', 'delivery.siteId', 'study.patientId', 'report.number', 'reportVersion.version']).where('deliveryReply.id', '=', id).executeTakeFirst()
    if (!reply) throw new DomainError('not-found')
    if (reply.answeredAt) throw new DomainError('wrong-state', { message: 'This was answered meanwhile.' })
    await trx.updateTable('deliveryReply').set({ answer, answeredAt: now(context), answeredBy: context.actor.userId }).where('id', '=', id).execute()
    await trx.updateTable('task').set({ doneAt: now(context), doneBy: context.actor.userId, resolution: 'answered' }).where('subject', '=', 'reply').where('subjectId', '=', id).where('doneAt', 'is', null).execute()
    await recordAuditEvent(context, trx, { name: 'delivery.reply-answered', subject: 'delivery', subjectId: reply.deliveryId, siteId: reply.siteId, patientId: reply.patientId, data: { number: reply.number, version: reply.version } })
  })
}
