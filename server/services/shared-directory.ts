import type { Trx } from '#server/database/connection'
import { sitesUsing, underWayFor } from '#server/database/queries/practice-use'
import { DomainError } from '#shared/errors'
import { mayAt, type ServiceContext } from './context'
import { createTask } from './create-task'

/**
 * The directory belongs to the whole organisation: a changed address or passphrase redirects every site's reports. So
 * whoever changes what decides where they go administers a site that uses the practice, and the others are told by a task.
 * A practice that nobody uses yet is open to every administrator. tests/server/attack-directory.test.ts guards it.
 * @param what the act in words, without a name: "The e-mail address of a physician"
 * @throws DomainError 'not-allowed'
 */
export async function changeShared(context: ServiceContext, trx: Trx, practiceId: string, what: string): Promise<void> {
  const sites = await sitesUsing(trx, practiceId)
  const own = sites.filter(site => mayAt(context.actor, 'directory.write', site.id))
  if (sites.length > 0 && own.length === 0) throw new DomainError('not-allowed', { message: `Reports of ${sites.map(site => site.name).join(', ')} go to this practice. An administrator of one of these sites has to do this.` })
  for (const site of sites.filter(each => !own.includes(each))) {
    await createTask(context, trx, { kind: 'directory-changed', subject: 'practice', subjectId: practiceId, siteId: site.id, ownerRole: 'administrator', sentence: `${what} was changed by another site, and reports of ${site.name} go there too. Look whether it is right.` })
  }
}

/** Whoever leaves gets nothing any more: what is under way goes to people. */
export async function handOverUnderWay(context: ServiceContext, trx: Trx, physician: { id: string, name: string }, because: string, dueAt?: string): Promise<void> {
  const { referrals, deliveries } = await underWayFor(trx, physician.id)
  for (const { id, number, siteId } of referrals) {
    await createTask(context, trx, { kind: 'referrer-left', subject: 'referral', subjectId: id, siteId, ownerRole: 'administrator', dueAt, sentence: `${number} names ${physician.name}: ${because}. Ask who takes over, and name that physician in the referral.` })
  }
  for (const { id, number, siteId } of deliveries) {
    await createTask(context, trx, { kind: 'recipient-left', subject: 'delivery', subjectId: id, siteId, ownerRole: 'administrator', dueAt, sentence: `${number} was for ${physician.name}: ${because}, and nobody acknowledged it. Find out who has it now.` })
  }
}
