import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { accessesOf, openAccess, openAccessTo, studiesElsewhere } from '#server/database/queries/emergency-access'
import { DomainError } from '#shared/errors'
import { emergencyActions, type Action } from '#shared/permissions'
import type { EmergencyAccessRow, EmergencyHit } from '#shared/schemas/reading'
import { mayAt, now, sitesWhere, type ServiceContext } from './context'
import { createTask } from './create-task'
import { flushViews, recordView } from './record-view'
import { recordAuditEvent } from './record-audit-event'

/** Common practice, no source: long enough to read one study, short enough to end with the shift. */
export const EMERGENCY_HOURS = 4
/** The review is due within three days (common practice, no source). */
const REVIEW_HOURS = 72
const hoursFrom = (at: string, hours: number) => new Date(Date.parse(at) + hours * 3_600_000).toISOString()

/**
 * Opens one study of a site where the reader holds no role, for a stated reason and for four hours. The reason stands in
 * the audit trail and with every view; the medical director of that site gets a task to review it.
 *
 * 45 CFR 164.312(a)(2)(ii) wants a procedure for access in an emergency; the limits in time and the review are ours.
 * @returns when it ends; an access that is open already is not made longer
 * @throws DomainError 'not-found', 'wrong-state' for a study of an own site
 */
export async function openInEmergency(context: ServiceContext, { studyId, reason }: { studyId: string, reason: string }): Promise<{ studyId: string, expiresAt: string }> {
  const opened = await context.db.transaction().execute(trx => openInside(context, trx, studyId, reason))
  recordView(context, { subject: 'study', subjectId: studyId, siteId: opened.siteId, patientId: opened.patientId, because: opened.reason })
  await flushViews(context)
  return { studyId, expiresAt: opened.expiresAt }
}

async function openInside(context: ServiceContext, trx: Trx, studyId: string, reason: string) {
  const study = await trx.selectFrom('study').innerJoin('site', 'site.id', 'study.siteId').select(['study.id', 'study.number', 'study.siteId', 'study.patientId', 'site.name as siteName']).where('study.id', '=', studyId).where('study.state', '<>', 'entered-in-error').executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  if (mayAt(context.actor, 'report.write', study.siteId)) throw new DomainError('wrong-state', { message: 'You hold a role at this site. Open the study from the queue.' })
  const [userId, openedAt] = [context.actor.userId!, now(context)]
  const known = await openAccess(trx, { userId, studyId, at: openedAt })
  if (known) return { ...study, ...known }
  const access = { id: randomUUID(), userId, studyId, siteId: study.siteId, reason, openedAt, expiresAt: hoursFrom(openedAt, EMERGENCY_HOURS) }
  await trx.insertInto('emergencyAccess').values(access).execute()
  await recordAuditEvent(context, trx, { name: 'record.opened-with-reason', subject: 'emergency-access', subjectId: access.id, siteId: study.siteId, patientId: study.patientId, data: { because: reason, until: access.expiresAt } })
  await createTask(context, trx, {
    kind: 'review-emergency-access', subject: 'emergency-access', subjectId: access.id, siteId: study.siteId, ownerRole: 'medical-director', dueAt: hoursFrom(openedAt, REVIEW_HOURS),
    sentence: `${study.number} was opened in an emergency by ${context.actor.label}, who holds no role at ${study.siteName}. Review the reason and what was done.`,
  })
  return { ...study, ...access }
}

/**
 * The context of one request to a record that was opened in an emergency: the reader acts as one of its site, for what an
 * emergency needs, and every view keeps the reason.
 * @param ids what the address names: the study, its referral, its report or a file of it
 */
export async function emergencyAccessFor(context: ServiceContext, action: Action, siteId: string, ids: readonly string[]): Promise<ServiceContext | null> {
  const { userId } = context.actor
  if (!userId || !emergencyActions.includes(action) || sitesWhere(context.actor, 'report.sign').length === 0) return null
  const access = await openAccessTo(context.db, { userId, siteId, ids, at: now(context) })
  if (!access) return null
  return { ...context, actor: { ...context.actor, holdings: [...context.actor.holdings, { siteId, role: 'neurologist' }], emergency: { reason: access.reason, until: access.expiresAt } } }
}

export async function ownEmergencyAccesses(context: ServiceContext): Promise<EmergencyAccessRow[]> {
  return await accessesOf(context.db, context.actor.userId!, now(context))
}

export async function searchForEmergency(context: ServiceContext, words: string): Promise<EmergencyHit[]> {
  return await studiesElsewhere(context.db, words, sitesWhere(context.actor, 'report.write'))
}
