import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { PhysicianChanges, PhysicianInput } from '#shared/schemas/directory'
import { changedValues } from './changed-fields'
import { now, type ServiceContext } from './context'
import { endDeskAccessIn } from './desk-access'
import { recordAuditEvent } from './record-audit-event'
import { changeShared, handOverUnderWay } from './shared-directory'
import { endOpenCodes } from './verify-address'

/**
 * Adds a physician to a practice. Namesakes are shown before, by another route; they do not stop this one. Nothing is
 * mailed before the address is verified.
 * @throws DomainError 'not-valid' when the practice is gone or has this physician at this address already
 */
export async function addPhysician(context: ServiceContext, { practiceId, email, ...input }: PhysicianInput & { practiceId: string }): Promise<{ id: string }> {
  return await context.db.transaction().execute(async (trx) => {
    const practice = await trx.selectFrom('practice').select('id').where('id', '=', practiceId).where('closedAt', 'is', null).executeTakeFirst()
    if (!practice) throw new DomainError('not-valid', { fields: [{ path: 'practiceId', message: 'Choose a practice of the directory.' }] })
    const id = randomUUID()
    await checkNotTwice(trx, { practiceId, email, name: input.name, exceptId: id })
    await trx.insertInto('physician').values({ id, practiceId, ...input, email: email.toLowerCase(), createdAt: now(context) }).execute()
    await recordAuditEvent(context, trx, { name: 'physician.added', subject: 'physician', subjectId: id, data: { practiceId } })
    return { id }
  })
}

/**
 * Changes an entry. A changed address loses its verification, and a code on its way to the earlier one is worth nothing
 * any more; access to the desk ends with it. `leftOn`: from that day on nothing is sent to them at this practice, what
 * already waits included, and what is under way becomes tasks.
 * @throws DomainError 'not-found' · 'not-valid' as `addPhysician`
 */
export async function changePhysician(context: ServiceContext, id: string, wish: PhysicianChanges): Promise<void> {
  const changes = { ...wish, email: wish.email?.toLowerCase() }
  await context.db.transaction().execute(async (trx) => {
    const before = await trx.selectFrom('physician').selectAll().where('id', '=', id).executeTakeFirst()
    if (!before) throw new DomainError('not-found')
    const changed = changedValues(before, changes)
    if (changed.length === 0) return
    await checkNotTwice(trx, { practiceId: before.practiceId, email: changes.email ?? before.email, name: changes.name ?? before.name, exceptId: id })
    await changeShared(context, trx, before.practiceId, 'The entry of a physician')
    const newAddress = changed.some(change => change.field === 'email')
    await trx.updateTable('physician').set(newAddress ? { ...changes, emailVerifiedAt: null, emailVerifiedBy: null, emailVerifiedNote: '' } : changes).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'physician.changed', subject: 'physician', subjectId: id, data: { changes: changed } })
    if (newAddress) await endOpenCodes(context, trx, id)
    // The account was made under the earlier address: who reads the new one may be somebody else.
    if (newAddress && before.userId) await endDeskAccessIn(context, trx, id)
    if (changes.leftOn) await handOverUnderWay(context, trx, before, 'that physician left the practice', `${changes.leftOn}T00:00:00.000Z`)
  })
}

/** One person stands in one practice once; physicians of a practice may share its mailbox. */
async function checkNotTwice(trx: Trx, { practiceId, email, name, exceptId }: { practiceId: string, email: string, name: string, exceptId: string }): Promise<void> {
  const same = await trx.selectFrom('physician').select('name').where('practiceId', '=', practiceId).where('email', '=', email.toLowerCase()).where('id', '<>', exceptId).execute()
  if (same.some(other => other.name.toLowerCase() === name.toLowerCase())) throw new DomainError('not-valid', { fields: [{ path: 'name', message: 'This physician stands in this practice already, with the same address.' }] })
}
