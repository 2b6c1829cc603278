import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { RoleProposal } from '#server/database/tables/role-proposal'
import { DomainError } from '#shared/errors'
import { roleLabels, rolesThatApprove, type Role } from '#shared/permissions'
import type { RoleProposalRow } from '#shared/schemas/user'
import { now, type ServiceContext } from './context'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'
import { checkSecondPerson, othersWhoApprove } from './second-person'

const TASK = 'role-proposal'
/** When everybody else who could consent is gone, the one who asks may confirm it alone after this time; they were told at once. */
const ALONE_AFTER_MS = 7 * 86_400_000

export interface RoleWish { userId: string, siteId: string, role: Role, startsOn: string, endsOn: string | null }

/**
 * Whether a role needs somebody's consent: one that approves, or any for the own account, as soon as another person could
 * give it or could have until lately. The very first ones are named by one person, and everybody concerned is told.
 */
export async function roleNeedsConsent(context: ServiceContext, trx: Trx, { userId, role }: Pick<RoleWish, 'userId' | 'role'>): Promise<boolean> {
  if (!rolesThatApprove.includes(role) && userId !== context.actor.userId) return false
  return (await othersWhoApprove(context, trx, [context.actor.userId, userId], true)).length > 0
}

/** Keeps the wish, makes a task for each who can consent, and tells by mail all who can or lately could. */
export async function proposeRole(context: ServiceContext, trx: Trx, wish: RoleWish): Promise<void> {
  const proposedBy = context.actor.userId
  if (!proposedBy) throw new DomainError('not-signed-in')
  const open = await trx.selectFrom('roleProposal').select('id').where('userId', '=', wish.userId).where('siteId', '=', wish.siteId).where('role', '=', wish.role).where('decidedAt', 'is', null).executeTakeFirst()
  if (open) return
  const id = randomUUID()
  await trx.insertInto('roleProposal').values({ id, ...wish, proposedBy, proposedAt: now(context), decidedBy: null, decidedAt: null, outcome: null }).execute()
  await recordAuditEvent(context, trx, { name: 'role.proposed', subject: 'user', subjectId: wish.userId, siteId: wish.siteId, data: { role: wish.role } })
  const sentence = `${context.actor.label} wants to give the role ${roleLabels[wish.role]}. It counts once you agree; decide under People.`
  for (const holder of await othersWhoApprove(context, trx, [proposedBy, wish.userId])) {
    await trx.insertInto('task').values({ id: randomUUID(), kind: TASK, subject: TASK, subjectId: id, siteId: wish.siteId, ownerId: holder.userId, ownerRole: null, sentence, createdAt: now(context), dueAt: null, doneAt: null, doneBy: null }).execute()
  }
  await tellOthers(context, trx, wish, 'role-wanted')
}

/** Tells everybody who approves, or lately did, that a role was given or is wanted; where nobody does, those who sign. */
export async function tellOthers(context: ServiceContext, trx: Trx, { userId, role }: Pick<RoleWish, 'userId' | 'role'>, about: 'role-wanted' | 'role-given'): Promise<void> {
  const approving = await othersWhoApprove(context, trx, [context.actor.userId, userId], true)
  const addresses = approving.length > 0 ? approving.map(holder => holder.email) : await addressesOfSigners(trx, [context.actor.userId, userId])
  const organisation = await trx.selectFrom('organisation').select('name').executeTakeFirst()
  for (const toAddress of addresses) await queueMail(context, trx, { template: 'account-notice', toAddress, data: { about, role: roleLabels[role], organisation: organisation?.name ?? '' } })
}

async function addressesOfSigners(trx: Trx, except: readonly (string | null)[]): Promise<string[]> {
  const rows = await trx.selectFrom('user').innerJoin('roleHolding', 'roleHolding.userId', 'user.id').select(['user.id', 'email']).distinct()
    .where('role', '=', 'neurologist').where('endsOn', 'is', null).where('deactivatedAt', 'is', null).where('passwordHash', 'is not', null).execute()
  return rows.filter(row => !except.includes(row.id)).map(row => row.email)
}

/** Roles that wait for a second person, with what the asker can do about each. */
export async function listRoleProposals(context: ServiceContext): Promise<RoleProposalRow[]> {
  const rows = await context.db.selectFrom('roleProposal').innerJoin('user', 'user.id', 'roleProposal.userId').innerJoin('user as proposer', 'proposer.id', 'roleProposal.proposedBy').innerJoin('site', 'site.id', 'roleProposal.siteId')
    .select(['roleProposal.id', 'roleProposal.userId', 'user.name', 'roleProposal.role', 'roleProposal.siteId', 'site.name as siteName', 'roleProposal.proposedBy', 'proposer.name as proposedByName', 'proposedAt', 'startsOn', 'endsOn'])
    .where('roleProposal.decidedAt', 'is', null).orderBy('proposedAt').execute()
  const visible: RoleProposalRow[] = []
  for (const { proposedBy, ...row } of rows) {
    const others = await othersWhoApprove(context, context.db, [proposedBy, row.userId])
    if (!maySee(context, { ...row, proposedBy }, others)) continue
    const aloneFrom = others.length === 0 && proposedBy === context.actor.userId ? new Date(Date.parse(row.proposedAt) + ALONE_AFTER_MS).toISOString() : null
    visible.push({ ...row, mine: proposedBy === context.actor.userId, aloneFrom })
  }
  return visible
}

/** Who approves at that site; everybody in the organisation who does where that site has nobody else. */
function maySee(context: ServiceContext, { siteId, proposedBy }: { siteId: string, proposedBy: string }, others: readonly { userId: string, siteIds: string[] }[]): boolean {
  const there = others.some(other => other.siteIds.includes(siteId))
  const approvesThere = context.actor.holdings.some(holding => holding.siteId === siteId && rolesThatApprove.includes(holding.role))
  return proposedBy === context.actor.userId || approvesThere || (!there && context.actor.holdings.some(holding => rolesThatApprove.includes(holding.role)))
}

/**
 * The second person agrees or declines; the one who asked may take it back, and after seven days confirm it alone when
 * nobody else is left who could agree.
 * @throws DomainError 'not-found' · 'not-allowed' · 'wrong-state' when it was decided meanwhile
 */
export async function decideRole(context: ServiceContext, { id, approve }: { id: string, approve: boolean }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const proposal = await trx.selectFrom('roleProposal').selectAll().where('id', '=', id).executeTakeFirst()
    if (!proposal || !maySee(context, proposal, await othersWhoApprove(context, trx, [proposal.proposedBy, proposal.userId]))) throw new DomainError('not-found')
    const outcome = approve ? await consentOf(context, trx, proposal) : 'declined'
    const decided = await trx.updateTable('roleProposal').set({ decidedBy: context.actor.userId, decidedAt: now(context), outcome }).where('id', '=', id).where('decidedAt', 'is', null).executeTakeFirst()
    if (decided.numUpdatedRows !== 1n) throw new DomainError('wrong-state')
    await trx.updateTable('task').set({ doneAt: now(context), doneBy: context.actor.userId, resolution: outcome }).where('kind', '=', TASK).where('subjectId', '=', id).where('doneAt', 'is', null).execute()
    await recordAuditEvent(context, trx, { name: 'role.decided', subject: 'user', subjectId: proposal.userId, siteId: proposal.siteId, data: { role: proposal.role, outcome } })
    if (outcome !== 'declined') await insertHolding(context, trx, proposal)
  })
}

async function consentOf(context: ServiceContext, trx: Trx, proposal: RoleProposal): Promise<'approved' | 'approved-alone'> {
  if (proposal.userId === context.actor.userId) throw new DomainError('not-allowed', { message: 'Nobody agrees to a role of the own account.' })
  if (proposal.proposedBy !== context.actor.userId) {
    await checkSecondPerson(context, trx, proposal.proposedBy)
    return 'approved'
  }
  const left = await othersWhoApprove(context, trx, [proposal.proposedBy, proposal.userId])
  const late = context.clock().getTime() - Date.parse(proposal.proposedAt) >= ALONE_AFTER_MS
  if (left.length > 0 || !late) throw new DomainError('not-allowed', { message: left.length > 0 ? 'Somebody else has to agree to a role that you gave.' : 'Nobody else is left who could agree. You can confirm this alone seven days after you asked.' })
  return 'approved-alone'
}

/** Puts a role into force. */
export async function insertHolding(context: ServiceContext, trx: Trx, { userId, siteId, role, startsOn, endsOn, proposedBy }: RoleWish & { proposedBy?: string }): Promise<void> {
  await trx.insertInto('roleHolding').values({ id: randomUUID(), userId, siteId, role, startsOn, endsOn, grantedBy: proposedBy ?? context.actor.userId, createdAt: now(context) }).execute()
  await recordAuditEvent(context, trx, { name: 'role.granted', subject: 'user', subjectId: userId, siteId, data: { role, startsOn, endsOn } })
}
