import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { HandOverMeans, PassphraseAnswer, PracticeChanges, PracticeInput } from '#shared/schemas/directory'
import { changedValues } from './changed-fields'
import { now, type ServiceContext } from './context'
import { makePassphrase } from './make-passphrase'
import { organisationDay } from './organisation-day'
import { recordAuditEvent } from './record-audit-event'
import { changeShared } from './shared-directory'

/** @throws DomainError 'not-valid' when a practice of this name stands in the directory for this town */
export async function addPractice(context: ServiceContext, input: PracticeInput): Promise<{ id: string }> {
  return await context.db.transaction().execute(async (trx) => {
    await checkFree(trx, input)
    const id = randomUUID()
    await trx.insertInto('practice').values({ id, ...input, createdAt: now(context) }).execute()
    await recordAuditEvent(context, trx, { name: 'practice.added', subject: 'practice', subjectId: id, data: {} })
    return { id }
  })
}

/** @throws DomainError 'not-found' · 'not-valid' as `addPractice` · 'not-allowed' as `changeShared` */
export async function changePractice(context: ServiceContext, id: string, changes: PracticeChanges): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const before = await openPractice(trx, id)
    const changed = changedValues(before, changes)
    if (changed.length === 0) return
    await checkFree(trx, { name: changes.name ?? before.name, town: changes.town ?? before.town }, id)
    await changeShared(context, trx, id, 'The entry of a practice')
    await trx.updateTable('practice').set(changes).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'practice.changed', subject: 'practice', subjectId: id, data: { changes: changed } })
  })
}

async function openPractice(trx: Trx, id: string) {
  const practice = await trx.selectFrom('practice').selectAll().where('id', '=', id).executeTakeFirst()
  if (!practice) throw new DomainError('not-found')
  return practice
}

/** Two practices of one name in one town could not be told apart when a report is sent. */
async function checkFree(trx: Trx, { name, town }: { name: string, town: string }, exceptId = ''): Promise<void> {
  const others = await trx.selectFrom('practice').select(['name', 'town']).where('id', '<>', exceptId).execute()
  const same = (a: string, b: string) => a.localeCompare(b, 'en', { sensitivity: 'base' }) === 0
  if (others.some(other => same(other.name, name) && same(other.town, town))) throw new DomainError('not-valid', { fields: [{ path: 'name', message: 'A practice of this name in this town is in the directory already. Open that one, or add what tells them apart.' }] })
}

/**
 * Makes the passphrase that opens the practice's PDFs, in place of an earlier one. It is answered here once and then
 * kept sealed; nothing is mailed before it is handed over. What was sent before still opens with the earlier one.
 * @throws DomainError 'not-found'
 */
export async function renewPassphrase(context: ServiceContext, practiceId: string): Promise<PassphraseAnswer> {
  const passphrase = makePassphrase()
  const madeAt = now(context)
  await context.db.transaction().execute(async (trx) => {
    const practice = await openPractice(trx, practiceId)
    await changeShared(context, trx, practiceId, 'The passphrase of a practice')
    await trx.updateTable('practice').set({ passphraseSealed: context.keys.seal(passphrase), passphraseMadeAt: madeAt, passphraseHandedOverAt: null, passphraseHandedOverOn: null, passphraseHandedOverBy: null, passphraseHandedOverTo: '' }).where('id', '=', practiceId).execute()
    await recordAuditEvent(context, trx, { name: 'practice.passphrase-made', subject: 'practice', subjectId: practiceId, data: { replaced: practice.passphraseSealed !== null } })
  })
  return { passphrase, madeAt }
}

/**
 * Notes that the practice has its passphrase: on which day, by which way and who took it. From now on its reports are mailed.
 * @throws DomainError 'not-found' · 'not-valid' without a passphrase or for a day after today
 */
export async function noteHandedOver(context: ServiceContext, practiceId: string, { by, on, to = '' }: { by: HandOverMeans, on: string, to?: string }): Promise<void> {
  if (on > await organisationDay(context)) throw new DomainError('not-valid', { fields: [{ path: 'on', message: 'The day of the hand-over must not be after today.' }] })
  await context.db.transaction().execute(async (trx) => {
    const practice = await openPractice(trx, practiceId)
    await changeShared(context, trx, practiceId, 'The passphrase of a practice')
    if (practice.passphraseSealed === null || practice.passphraseMadeAt === null) throw new DomainError('not-valid', { message: 'The practice has no passphrase yet. Make one first.' })
    await trx.updateTable('practice').set({ passphraseHandedOverAt: now(context), passphraseHandedOverOn: on, passphraseHandedOverBy: by, passphraseHandedOverTo: to }).where('id', '=', practiceId).execute()
    await recordAuditEvent(context, trx, { name: 'practice.passphrase-handed-over', subject: 'practice', subjectId: practiceId, data: { by, on } })
  })
}
