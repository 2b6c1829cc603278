import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { ReferenceAdoption } from '#server/database/tables/reference-adoption'
import { techniquesNeeded } from '#shared/catalogue/comparisons'
import { techniqueOf } from '#shared/catalogue/nerves'
import { DomainError, type FieldError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { referenceSet } from './reference-sets'
import { checkSecondPerson } from './second-person'
import { localDate } from './site-time'

export interface Proposal { siteId: string, setId: string, setVersion: number, techniques: string[] | null, effectiveOn: string }

async function todayAt(context: ServiceContext, trx: Trx, siteId: string): Promise<string> {
  const site = await trx.selectFrom('site').select('timeZone').where('id', '=', siteId).executeTakeFirst()
  if (!site) throw new DomainError('not-found')
  return localDate(context.clock(), site.timeZone)
}

async function checkProposal(trx: Trx, { setId, setVersion, techniques, effectiveOn }: Proposal, today: string): Promise<void> {
  const fields: FieldError[] = []
  if (!await referenceSet(trx, setId, setVersion)) fields.push({ path: 'setId', message: 'Choose a set of the shelf.' })
  if (techniques?.some(id => !techniquesNeeded(id).every(technique => techniqueOf(technique))) || techniques?.length === 0) fields.push({ path: 'techniques', message: 'Choose one nerve or more, or take the whole set.' })
  if (effectiveOn < today) fields.push({ path: 'effectiveOn', message: 'The first day must not lie in the past: studies that were made are judged by what was in use then.' })
  if (fields.length) throw new DomainError('not-valid', { fields })
}

/** Proposes a set for a site; nothing is judged by it before a second person approves. */
export async function proposeAdoption(context: ServiceContext, proposal: Proposal): Promise<{ id: string }> {
  const proposedBy = context.actor.userId
  if (!proposedBy) throw new DomainError('not-signed-in')
  return context.db.transaction().execute(async (trx) => {
    const { siteId, setId, setVersion, techniques, effectiveOn } = proposal
    await checkProposal(trx, proposal, await todayAt(context, trx, siteId))
    const last = await trx.selectFrom('referenceAdoption').select(eb => eb.fn.max('position').as('position')).where('siteId', '=', siteId).executeTakeFirst()
    const id = randomUUID()
    await trx.insertInto('referenceAdoption').values({ id, siteId, setId, setVersion, techniquesJson: techniques ? JSON.stringify(techniques) : null, position: (last?.position ?? 0) + 1, proposedBy, proposedAt: now(context), approvedBy: null, approvedAt: null, effectiveOn, endedOn: null, endedBy: null }).execute()
    await recordAuditEvent(context, trx, { name: 'shelf.adoption-proposed', subject: 'adoption', subjectId: id, siteId, data: { setId, setVersion, techniques, effectiveOn } })
    return { id }
  })
}

async function adoptionIn(trx: Trx, id: string): Promise<ReferenceAdoption> {
  const adoption = await trx.selectFrom('referenceAdoption').selectAll().where('id', '=', id).executeTakeFirst()
  if (!adoption) throw new DomainError('not-found')
  return adoption
}

/**
 * Approves what another person proposed. A first day that passed meanwhile becomes today, so that no finished study is judged anew.
 * @throws DomainError 'not-allowed' for the proposer; 'wrong-state' when it is approved or ended already
 */
export async function approveAdoption(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const adoption = await adoptionIn(trx, id)
    const { siteId, setId, setVersion } = adoption
    if (adoption.proposedBy === context.actor.userId) throw new DomainError('not-allowed', { message: 'A set is approved by another person than the one who proposed it.' })
    await checkSecondPerson(context, trx, adoption.proposedBy)
    const today = await todayAt(context, trx, siteId)
    const effectiveOn = adoption.effectiveOn < today ? today : adoption.effectiveOn
    const approved = await trx.updateTable('referenceAdoption').set({ approvedBy: context.actor.userId, approvedAt: now(context), effectiveOn }).where('id', '=', id).where('approvedAt', 'is', null).where('endedOn', 'is', null).executeTakeFirst()
    if (approved.numUpdatedRows !== 1n) throw new DomainError('wrong-state')
    await recordAuditEvent(context, trx, { name: 'shelf.adoption-approved', subject: 'adoption', subjectId: id, siteId, data: { setId, setVersion, effectiveOn } })
  })
}

/** Ends the use of a set from tomorrow on (today's studies keep it), or takes back a proposal at once. */
export async function endAdoption(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const { siteId, setId, setVersion, approvedAt } = await adoptionIn(trx, id)
    const today = await todayAt(context, trx, siteId)
    const endedOn = approvedAt === null ? today : new Date(Date.parse(`${today}T00:00:00Z`) + 86_400_000).toISOString().slice(0, 10)
    const ended = await trx.updateTable('referenceAdoption').set({ endedOn, endedBy: context.actor.userId }).where('id', '=', id).where('endedOn', 'is', null).executeTakeFirst()
    if (ended.numUpdatedRows !== 1n) throw new DomainError('wrong-state')
    await recordAuditEvent(context, trx, { name: 'shelf.adoption-ended', subject: 'adoption', subjectId: id, siteId, data: { setId, setVersion, endedOn } })
  })
}

/** Notes that rows recalled from memory were compared with the paper by this person. */
export async function checkRows(context: ServiceContext, { setId, setVersion, rowIds }: { setId: string, setVersion: number, rowIds: string[] }): Promise<void> {
  const checkedBy = context.actor.userId
  if (!checkedBy) throw new DomainError('not-signed-in')
  const known = new Set((await referenceSet(context.db, setId, setVersion))?.rows.filter(row => row.basis === 'from memory').map(row => row.id))
  if (rowIds.some(rowId => !known.has(rowId))) throw new DomainError('not-valid', { fields: [{ path: 'rowIds', message: 'Choose rows of this set that come from memory.' }] })
  await context.db.transaction().execute(async (trx) => {
    for (const rowId of new Set(rowIds)) await trx.insertInto('rowCheck').values({ setId, setVersion, rowId, checkedBy, checkedAt: now(context) }).onConflict(conflict => conflict.doNothing()).execute()
    await recordAuditEvent(context, trx, { name: 'shelf.rows-checked', subject: 'reference-set', subjectId: setId, data: { setId, setVersion, rowIds } })
  })
}
