import type { Trx } from '#server/database/connection'
import { recipientById } from '#server/database/queries/recipients'
import { reportVersion } from '#server/database/queries/reports'
import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { queueDeliveries } from './queue-deliveries'
import { recordAuditEvent } from './record-audit-event'
import { localDate } from './site-time'
import { intactSnapshot } from './verify-version'

export interface SendTo { reportId: string, physicianId: string, reason: string, /** who got it by mistake: the referral names the right one from now on */ insteadOf?: string }

const refuse = (message: string): never => {
  throw new DomainError('not-valid', { fields: [{ path: 'physicianId', message }] })
}

/**
 * Sends the latest version to one more person of the directory, through the same hold and outbox as every other. With
 * `insteadOf` that person takes the place of the wrong one in the referral, so that later versions go to the right one.
 * @throws DomainError 'not-found' · 'not-valid' when they have it already, left, or are not in the directory · 'altered'
 */
export async function sendToRecipient(context: ServiceContext, { reportId, physicianId, reason, insteadOf }: SendTo): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const place = await trx.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId').innerJoin('site', 'site.id', 'study.siteId').select(['study.siteId', 'study.patientId', 'study.referralId', 'site.timeZone']).where('report.id', '=', reportId).executeTakeFirst()
    const version = await reportVersion(trx, reportId)
    if (!place || !version) throw new DomainError('not-found')
    if (version.status === 'entered-in-error') refuse('This report was entered in error: it goes to nobody any more.')
    const recipient = await recipientById(trx, physicianId, localDate(context.clock(), place.timeZone)) ?? refuse('This physician is not in the directory.')
    if (recipient.because.includes('left')) refuse('This physician left the practice. Choose another.')
    await refuseSecond(trx, { versionId: version.id, physicianId })
    const snapshot = intactSnapshot(version)
    if (insteadOf) await replaceInReferral(trx, { referralId: place.referralId, physicianId, insteadOf })
    await recordAuditEvent(context, trx, { name: 'delivery.redirected', subject: 'report', subjectId: reportId, siteId: place.siteId, patientId: place.patientId, data: { number: snapshot.number, version: version.version, physicianId, insteadOf: insteadOf ?? null, reason } })
    await queueDeliveries(context, trx, { version, snapshot, siteId: place.siteId, patientId: place.patientId }, [recipient])
  })
}

async function refuseSecond(trx: Trx, { versionId, physicianId }: { versionId: string, physicianId: string }): Promise<void> {
  const living = await trx.selectFrom('delivery').select('id').where('reportVersionId', '=', versionId).where('physicianId', '=', physicianId).where('state', '<>', 'withdrawn').executeTakeFirst()
  if (living) refuse('This version is on its way to this physician already, or was sent. Look at that delivery.')
}

async function replaceInReferral(trx: Trx, { referralId, physicianId, insteadOf }: { referralId: string, physicianId: string, insteadOf: string }): Promise<void> {
  const referral = await trx.selectFrom('referral').select(['physicianId', 'revision']).where('id', '=', referralId).executeTakeFirstOrThrow()
  const copied = await trx.deleteFrom('referralCopy').where('referralId', '=', referralId).where('physicianId', 'in', referral.physicianId === insteadOf ? [insteadOf, physicianId] : [insteadOf]).executeTakeFirst()
  if (referral.physicianId === insteadOf) await trx.updateTable('referral').set({ physicianId, revision: referral.revision + 1 }).where('id', '=', referralId).execute()
  else if (copied.numDeletedRows > 0n && referral.physicianId !== physicianId) {
    await trx.insertInto('referralCopy').values({ referralId, physicianId }).onConflict(conflict => conflict.doNothing()).execute()
    await trx.updateTable('referral').set({ revision: referral.revision + 1 }).where('id', '=', referralId).execute()
  }
}
