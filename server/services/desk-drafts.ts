import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { deskDraftSchema, deskPatientOf, deskProblems, deskReferralOf, type DeskDraftValues, type DeskDraftView, type DeskForm, type DeskSent } from '#shared/schemas/desk'
import { now, type ServiceContext } from './context'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'
import { insertPatient } from './save-patient'
import { insertReferral } from './save-referral'
import { ownEntries } from './view-desk'

/** More than anybody leaves half done; it keeps an account from filling the disk. */
const MOST_DRAFTS = 20

const ownerOf = (context: ServiceContext) => {
  if (!context.actor.userId) throw new DomainError('not-signed-in')
  return context.actor.userId
}

/** Who may be referred for and where, with the own drafts. Nothing of the register. */
export async function viewDeskForm(context: ServiceContext): Promise<DeskForm> {
  const entries = await ownEntries(context)
  const sites = await context.db.selectFrom('site').select(['id', 'name', 'town']).where('closedAt', 'is', null).orderBy('name').execute()
  const drafts = await context.db.selectFrom('deskDraft').select(['id', 'savedAt', 'bodyJson']).where('userId', '=', ownerOf(context)).orderBy('savedAt', 'desc').execute()
  return {
    practices: entries.map(({ id, name, town }) => ({ physicianId: id, name, town })), sites,
    drafts: drafts.map(({ bodyJson, ...draft }) => ({ ...draft, who: nameIn(valuesOf(bodyJson)) })),
  }
}

const valuesOf = (bodyJson: string): DeskDraftValues => deskDraftSchema.parse(JSON.parse(bodyJson))
const nameIn = ({ familyName, givenName }: DeskDraftValues) => [familyName.trim(), givenName.trim()].filter(Boolean).join(', ')

async function ownDraft(context: ServiceContext, db: Trx, id: string) {
  const draft = await db.selectFrom('deskDraft').selectAll().where('id', '=', id).where('userId', '=', ownerOf(context)).executeTakeFirst()
  if (!draft) throw new DomainError('not-found')
  return draft
}

/** @throws DomainError 'not-found' for a draft of somebody else, as for one that does not exist */
export async function viewDraft(context: ServiceContext, id: string): Promise<DeskDraftView> {
  const { revision, savedAt, bodyJson } = await context.db.transaction().execute(trx => ownDraft(context, trx, id))
  return { id, revision, savedAt, values: valuesOf(bodyJson) }
}

/**
 * Begins a draft.
 * @throws DomainError 'not-allowed' without an entry of the directory · 'not-valid' when too many wait
 */
export async function beginDraft(context: ServiceContext, values: DeskDraftValues): Promise<DeskDraftView> {
  const userId = ownerOf(context)
  if ((await ownEntries(context)).length === 0) throw new DomainError('not-allowed')
  return await context.db.transaction().execute(async (trx) => {
    const { n } = await trx.selectFrom('deskDraft').select(eb => eb.fn.countAll<number>().as('n')).where('userId', '=', userId).executeTakeFirstOrThrow()
    if (n >= MOST_DRAFTS) throw new DomainError('not-valid', { message: `${MOST_DRAFTS} drafts wait already. Send or discard one first.` })
    const [id, at] = [randomUUID(), now(context)]
    await trx.insertInto('deskDraft').values({ id, userId, bodyJson: JSON.stringify(values), createdAt: at, savedAt: at }).execute()
    return { id, revision: 1, savedAt: at, values }
  })
}

/**
 * Saves what is typed, however incomplete.
 * @throws DomainError 'not-found' · 'changed-meanwhile' when another window of the same person saved since
 */
export async function saveDraft(context: ServiceContext, { id, revision, values }: { id: string, revision: number, values: DeskDraftValues }): Promise<{ revision: number, savedAt: string }> {
  return await context.db.transaction().execute(async (trx) => {
    checkRevision(await ownDraft(context, trx, id), revision)
    const savedAt = now(context)
    await trx.updateTable('deskDraft').set({ bodyJson: JSON.stringify(values), savedAt, revision: revision + 1 }).where('id', '=', id).execute()
    return { revision: revision + 1, savedAt }
  })
}

function checkRevision(draft: { revision: number, bodyJson: string }, revision: number): void {
  if (draft.revision !== revision) throw new DomainError('changed-meanwhile', { details: { theirs: { revision: draft.revision, values: valuesOf(draft.bodyJson) } } })
}

/** @throws DomainError 'not-found' */
export async function discardDraft(context: ServiceContext, id: string): Promise<void> {
  const gone = await context.db.deleteFrom('deskDraft').where('id', '=', id).where('userId', '=', ownerOf(context)).executeTakeFirst()
  if (gone.numDeletedRows === 0n) throw new DomainError('not-found')
}

/**
 * Sends a draft: a referral in the state received, under a record of its own that somebody of the clinic compares with
 * the register. Whether the patient is known there is not told. A second sending finds no draft.
 * @throws DomainError 'not-valid' with every field · 'not-found' · 'changed-meanwhile'
 */
export async function sendDraft(context: ServiceContext, { id, revision, values }: { id: string, revision: number, values: DeskDraftValues }): Promise<DeskSent> {
  await viewDraft(context, id)
  const fields = deskProblems(values)
  if (!(await ownEntries(context)).some(entry => entry.id === values.physicianId)) fields.push({ path: 'physicianId', message: 'Choose one of your practices.' })
  if (fields.length) throw new DomainError('not-valid', { fields })
  return await context.db.transaction().execute(async (trx) => {
    checkRevision(await ownDraft(context, trx, id), revision)
    await trx.deleteFrom('deskDraft').where('id', '=', id).execute()
    return await receiveFromDesk(context, trx, values)
  })
}

async function receiveFromDesk(context: ServiceContext, trx: Trx, values: DeskDraftValues): Promise<DeskSent> {
  const patient = await insertPatient(context, trx, deskPatientOf(values).data!)
  const referral = await insertReferral(context, trx, deskReferralOf(values, patient.id).data!)
  const sentAt = now(context)
  await moveState(context, trx, { subject: 'referral', id: referral.id, from: 'draft', to: 'received', reason: 'sent from the desk' })
  await trx.updateTable('referral').set({ receivedAt: sentAt }).where('id', '=', referral.id).execute()
  await trx.insertInto('deskReferral').values({ referralId: referral.id, patientId: patient.id, sentBy: ownerOf(context), sentAt, identifiedAt: null, identifiedBy: null, outcome: null, mergeId: null }).execute()
  await recordAuditEvent(context, trx, { name: 'referral.sent-from-desk', subject: 'referral', subjectId: referral.id, siteId: values.siteId ?? undefined, patientId: patient.id, data: { number: referral.number } })
  return referral
}
