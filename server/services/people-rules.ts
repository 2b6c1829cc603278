import { DomainError } from '#shared/errors'
import type { Action } from '#shared/permissions'
import { mayAt, type Actor } from './context'

/**
 * What concerns the whole account (address, password link, deactivation) needs the right at every site where the person
 * works: otherwise the administrator of one clinic could take over an account that opens another's records.
 * @throws DomainError 'not-allowed'
 */
export function checkMayWriteEverywhere(actor: Actor, holdings: readonly { siteId: string }[], action: Action): void {
  if (holdings.every(holding => mayAt(actor, action, holding.siteId))) return
  throw new DomainError('not-allowed', { message: 'This person also works at a site that you do not administer. Someone who administers all of them has to do this.' })
}
