import { randomUUID } from 'node:crypto'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { scopeSite } from '#server/database/queries/policies'
import type { PolicyVersion } from '#server/database/tables/policy-version'
import { DomainError } from '#shared/errors'
import { policies, type PolicyName } from '#shared/policies/index'
import { mayAt, now, sitesWhere, type ServiceContext } from './context'
import { organisationDay } from './organisation-day'
import { recordAuditEvent } from './record-audit-event'
import { checkSecondPerson } from './second-person'
import { localDate } from './site-time'

export interface PolicyProposal { name: PolicyName, siteId: string | null, body: unknown, note: string, effectiveOn: string }

async function today(context: ServiceContext, trx: Trx, siteId: string | null): Promise<string> {
  if (siteId === null) return await organisationDay({ ...context, db: trx })
  const site = await trx.selectFrom('site').select('timeZone').where('id', '=', siteId).executeTakeFirst()
  if (!site) throw new DomainError('not-found')
  return localDate(context.clock(), site.timeZone)
}

function checkBody(name: PolicyName, body: unknown): string {
  const parsed = (policies[name].schema as z.ZodType).safeParse(body)
  if (parsed.success) return JSON.stringify(parsed.data)
  throw new DomainError('not-valid', { fields: parsed.error.issues.map(issue => ({ path: ['body', ...issue.path].join('.'), message: issue.message })) })
}

/** Proposes a version of a policy. It holds for nobody before another person approves it. */
export async function proposePolicy(context: ServiceContext, proposal: PolicyProposal): Promise<{ id: string, version: number }> {
  const proposedBy = context.actor.userId
  if (!proposedBy) throw new DomainError('not-signed-in')
  const { name, note, effectiveOn } = proposal
  const siteId = scopeSite(name, proposal.siteId)
  if (policies[name].scope === 'site' && siteId === null) throw new DomainError('not-valid', { fields: [{ path: 'siteId', message: 'Choose the site.' }] })
  const bodyJson = checkBody(name, proposal.body)
  return await context.db.transaction().execute(async (trx) => {
    if (effectiveOn < await today(context, trx, siteId)) throw new DomainError('not-valid', { fields: [{ path: 'effectiveOn', message: 'The first day must not lie in the past: what was done then was done by the policy of that day.' }] })
    const last = await trx.selectFrom('policyVersion').select(eb => eb.fn.max('version').as('version')).where('name', '=', name).where('siteId', 'is', siteId).executeTakeFirst()
    const id = randomUUID()
    const version = (last?.version ?? 0) + 1
    await trx.insertInto('policyVersion').values({ id, name, siteId, version, bodyJson, note, proposedBy, proposedAt: now(context), approvedBy: null, approvedAt: null, effectiveOn, withdrawnAt: null, withdrawnBy: null }).execute()
    await recordAuditEvent(context, trx, { name: 'policy.proposed', subject: 'policy', subjectId: id, siteId, data: { policy: name, version, effectiveOn } })
    return { id, version }
  })
}

async function openProposal(trx: Trx, id: string): Promise<PolicyVersion> {
  const found = await trx.selectFrom('policyVersion').selectAll().where('id', '=', id).executeTakeFirst()
  if (!found) throw new DomainError('not-found')
  if (found.approvedAt !== null || found.withdrawnAt !== null) throw new DomainError('wrong-state')
  return found
}

/**
 * Approves what another person proposed. A first day that passed meanwhile becomes today, so that nothing finished is judged anew.
 * @throws DomainError 'not-allowed' for the proposer; 'wrong-state' when it was approved or taken back already
 */
export async function approvePolicy(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const { name, siteId, version, proposedBy, ...proposal } = await openProposal(trx, id)
    if (proposedBy === context.actor.userId) throw new DomainError('not-allowed', { message: 'A policy is approved by another person than the one who proposed it.' })
    await checkSecondPerson(context, trx, proposedBy)
    const day = await today(context, trx, siteId)
    const effectiveOn = proposal.effectiveOn < day ? day : proposal.effectiveOn
    await trx.updateTable('policyVersion').set({ approvedBy: context.actor.userId, approvedAt: now(context), effectiveOn }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'policy.approved', subject: 'policy', subjectId: id, siteId, data: { policy: name, version, effectiveOn } })
  })
}

/** Takes back a proposal of one's own, or refuses that of another as somebody who may approve it. */
export async function withdrawPolicy(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const { name, siteId, version, effectiveOn, proposedBy } = await openProposal(trx, id)
    const mayRefuse = siteId === null ? sitesWhere(context.actor, 'shelf.approve').length > 0 : mayAt(context.actor, 'shelf.approve', siteId)
    if (proposedBy !== context.actor.userId && !mayRefuse) throw new DomainError('not-allowed')
    await trx.updateTable('policyVersion').set({ withdrawnAt: now(context), withdrawnBy: context.actor.userId }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'policy.withdrawn', subject: 'policy', subjectId: id, siteId, data: { policy: name, version, effectiveOn } })
  })
}
