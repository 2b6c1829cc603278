import { policyInForce, policyVersions, scopeSite } from '#server/database/queries/policies'
import { DomainError } from '#shared/errors'
import { policies, type PolicyName } from '#shared/policies/index'
import type { PolicyView } from '#shared/schemas/policy'
import type { ServiceContext } from './context'
import { organisationDay } from './organisation-day'

/** A policy as the shelf shows it: what holds today and every version. `sites` are those whose shelf the person may read. */
export async function viewPolicy(context: ServiceContext, { name, siteId, sites }: { name: PolicyName, siteId: string | null, sites: readonly string[] }): Promise<PolicyView> {
  const { label, about, scope } = policies[name]
  const asked = scopeSite(name, siteId)
  if (scope === 'site' && (asked === null || !sites.includes(asked))) throw new DomainError('not-found')
  const inForce = await policyInForce(context.db, name, asked, await organisationDay(context))
  return { name, label, about, scope, inForce, versions: await policyVersions(context.db, name, asked) }
}
