import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { organisationDay } from './organisation-day'
import { peopleWho } from './people-who'
import { recordAuditEvent } from './record-audit-event'

/** Who can look after referrals of a site: a role there that triages, in force today. */
export async function possibleOwners(context: ServiceContext, siteId: string): Promise<{ id: string, name: string }[]> {
  return await peopleWho(context.db, 'referral.triage', siteId, await organisationDay(context))
}

const closed = ['answered', 'declined', 'cancelled', 'entered-in-error']

/**
 * Says who looks after a referral; null for nobody in particular.
 * @throws DomainError 'not-valid' for somebody without a fitting role at the site · 'wrong-state' when it is closed
 */
export async function reassignReferral(context: ServiceContext, { id, ownerId }: { id: string, ownerId: string | null }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await trx.selectFrom('referral').select(['id', 'siteId', 'patientId', 'state', 'ownerId']).where('id', '=', id).executeTakeFirst()
    if (!referral) throw new DomainError('not-found')
    if (closed.includes(referral.state)) throw new DomainError('wrong-state', { details: { state: referral.state } })
    if (ownerId !== null && !(await possibleOwners({ ...context, db: trx }, referral.siteId)).some(person => person.id === ownerId)) throw new DomainError('not-valid', { fields: [{ path: 'ownerId', message: 'Choose somebody who works at the intake of this site.' }] })
    if (referral.ownerId === ownerId) return
    await trx.updateTable('referral').set({ ownerId }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'referral.reassigned', subject: 'referral', subjectId: id, siteId: referral.siteId, patientId: referral.patientId, data: { ownerId, before: referral.ownerId } })
  })
}
