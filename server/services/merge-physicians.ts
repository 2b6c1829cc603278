import type { Trx } from '#server/database/connection'
import type { Physician } from '#server/database/tables/physician'
import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { organisationDay } from './organisation-day'
import { recordAuditEvent } from './record-audit-event'
import { changeShared } from './shared-directory'
import { endOpenCodes } from './verify-address'

/**
 * Two entries of the directory are one person: referrals and copies that are under way go to the entry that stays, later
 * versions of earlier reports too, and nothing is sent to the other one any more. What was sent stays with the entry it
 * was sent to. An account for the desk moves along where the staying entry has none.
 * @throws DomainError 'not-found' · 'not-valid' when one left, is merged already, or both have an account · 'not-allowed'
 */
export async function mergePhysicians(context: ServiceContext, { id, into }: { id: string, into: string }): Promise<void> {
  const today = await organisationDay(context)
  await context.db.transaction().execute(async (trx) => {
    const [from, to] = [await entry(trx, id), await entry(trx, into)]
    checkPair(from, to, today)
    for (const practiceId of new Set([from.practiceId, to.practiceId])) await changeShared(context, trx, practiceId, 'An entry of a physician, merged with another,')
    const referrals = await moveReferrals(trx, from.id, to.id)
    await endOpenCodes(context, trx, from.id)
    await trx.updateTable('physician').set({ mergedInto: to.id, leftOn: today, userId: null }).where('id', '=', from.id).execute()
    // Entries that were merged into this one before go along.
    await trx.updateTable('physician').set({ mergedInto: to.id }).where('mergedInto', '=', from.id).execute()
    if (to.userId === null && from.userId !== null) await trx.updateTable('physician').set({ userId: from.userId }).where('id', '=', to.id).execute()
    await recordAuditEvent(context, trx, { name: 'physician.merged', subject: 'physician', subjectId: from.id, data: { into: to.id, referrals } })
  })
}

async function entry(trx: Trx, id: string): Promise<Physician> {
  const found = await trx.selectFrom('physician').selectAll().where('id', '=', id).executeTakeFirst()
  if (!found) throw new DomainError('not-found')
  return found
}

function checkPair(from: Physician, to: Physician, today: string): void {
  const message = from.id === to.id
    ? 'Choose another entry: this is the same one.'
    : from.mergedInto !== null || to.mergedInto !== null
      ? 'One of the two was merged with another entry already.'
      : to.leftOn !== null && to.leftOn <= today
        ? 'Nothing is sent to the entry that would stay: that physician left. Choose the other way round.'
        : from.userId !== null && to.userId !== null && from.userId !== to.userId ? 'Both entries open the desk with different accounts. End the access of one first.' : ''
  if (message) throw new DomainError('not-valid', { fields: [{ path: 'into', message }] })
}

async function moveReferrals(trx: Trx, from: string, to: string): Promise<number> {
  const moved = await trx.updateTable('referral').set({ physicianId: to }).where('physicianId', '=', from).where('state', 'not in', ['answered', 'declined', 'cancelled', 'entered-in-error']).executeTakeFirst()
  const copies = await trx.selectFrom('referralCopy').innerJoin('referral', 'referral.id', 'referralCopy.referralId').select('referralId').where('referralCopy.physicianId', '=', from).where('referral.state', 'not in', ['answered', 'declined', 'cancelled', 'entered-in-error']).execute()
  for (const { referralId } of copies) {
    await trx.deleteFrom('referralCopy').where('referralId', '=', referralId).where('physicianId', '=', from).execute()
    await trx.insertInto('referralCopy').values({ referralId, physicianId: to }).onConflict(conflict => conflict.doNothing()).execute()
  }
  return Number(moved.numUpdatedRows) + copies.length
}
