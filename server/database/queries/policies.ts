import { policies, type PolicyBody, type PolicyInForce, type PolicyName } from '#shared/policies/index'
import type { PolicyVersionView } from '#shared/schemas/policy'
import type { Database, Trx } from '../connection'

/**
 * The policy that holds on a day: the newest approved version whose first day has come, else the initial one (version 0).
 * For a policy of the organisation `siteId` does not matter.
 *
 * @example (await policyInForce(db, 'clocks', siteId, '2026-12-02')).body.sign.urgent // => 24
 */
export async function policyInForce<N extends PolicyName>(db: Database | Trx, name: N, siteId: string | null, day: string): Promise<PolicyInForce<N>> {
  const row = await db.selectFrom('policyVersion').select(['version', 'bodyJson', 'effectiveOn'])
    .where('name', '=', name).where('siteId', 'is', scopeSite(name, siteId)).where('approvedAt', 'is not', null).where('effectiveOn', '<=', day)
    .orderBy('effectiveOn', 'desc').orderBy('version', 'desc').limit(1).executeTakeFirst()
  if (!row) return { version: 0, body: await initialBody(db, name, siteId), effectiveOn: null }
  return { version: row.version, body: policies[name].schema.parse(JSON.parse(row.bodyJson)) as PolicyBody<N>, effectiveOn: row.effectiveOn }
}

/** What holds before anything was approved: what was entered with the site or the organisation, else what the program comes with. */
async function initialBody<N extends PolicyName>(db: Database | Trx, name: N, siteId: string | null): Promise<PolicyBody<N>> {
  return { ...policies[name].initial, ...await enteredBefore(db, name, siteId) } as PolicyBody<N>
}

async function enteredBefore(db: Database | Trx, name: PolicyName, siteId: string | null): Promise<object | undefined> {
  if (name === 'report-form') return await db.selectFrom('organisation').select(['paperSize', 'disclaimer']).executeTakeFirst()
  if (name === 'temperature') return await db.selectFrom('site').select(['handMinimumC', 'footMinimumC']).where('id', '=', siteId).executeTakeFirst()
  if (name === 'uncertainty') return await db.selectFrom('site').select(['distanceUncertaintyMm as distanceMm', 'latencyUncertaintyMs as latencyMs']).where('id', '=', siteId).executeTakeFirst()
  return undefined
}

/** null for a policy of the organisation, whatever site was asked for. */
export function scopeSite(name: PolicyName, siteId: string | null): string | null {
  return policies[name].scope === 'organisation' ? null : siteId
}

/** Every version of a policy, newest first, with who proposed and who approved it. */
export async function policyVersions(db: Database, name: PolicyName, siteId: string | null): Promise<PolicyVersionView[]> {
  const rows = await db.selectFrom('policyVersion').innerJoin('user as proposer', 'proposer.id', 'proposedBy').leftJoin('user as approver', 'approver.id', 'approvedBy')
    .select(['policyVersion.id', 'version', 'bodyJson', 'note', 'proposedBy as proposedById', 'proposer.name as proposedBy', 'proposedAt', 'approver.name as approvedBy', 'approvedAt', 'effectiveOn', 'withdrawnAt'])
    .where('policyVersion.name', '=', name).where('siteId', 'is', scopeSite(name, siteId)).orderBy('version', 'desc').execute()
  return rows.map(({ bodyJson, ...row }) => ({ ...row, body: JSON.parse(bodyJson) as unknown }))
}

export async function policyVersionById(db: Database, id: string): Promise<{ name: string, siteId: string | null } | undefined> {
  return await db.selectFrom('policyVersion').select(['name', 'siteId']).where('id', '=', id).executeTakeFirst()
}
