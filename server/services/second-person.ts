import type { Database, Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { rolesThatApprove } from '#shared/permissions'
import type { ServiceContext } from './context'
import { allHoldings } from '#server/database/queries/people'
import { inForce } from './read-session'

/** How long somebody whose role ended or whose account was closed still counts as a person who could have consented. */
const FORMER_DAYS = 90
const DAY_MS = 86_400_000

/** @example mailboxOf('Jo.Novak+two@Clinic.example') // => 'jo.novak@clinic.example' */
const mailboxOf = (email: string) => email.toLowerCase().replace(/\+[^@]*@/, '@')

/**
 * Whether the actor counts as the second of two people. One person with two accounts must not: so the account has an
 * address that a mail proved, another mailbox than the first person's, and a second factor of its own. That its role was
 * not given by the first person alone is seen to by `role-proposals.ts`. tests/server/attack-two-people.test.ts guards it.
 * @throws DomainError 'not-allowed' with what is missing
 */
export async function checkSecondPerson(context: ServiceContext, trx: Database | Trx, firstId: string | null): Promise<void> {
  const people = await trx.selectFrom('user').select(['id', 'email', 'emailConfirmedAt', 'totpEnabledAt']).where('id', 'in', [context.actor.userId ?? '', firstId ?? '']).execute()
  const me = people.find(person => person.id === context.actor.userId)
  const first = people.find(person => person.id === firstId)
  const because = !me || me.id === firstId
    ? 'A second person has to do this; you did the first half.'
    : me.emailConfirmedAt === null
      ? 'Confirm your e-mail address under Profile first: the second of two people has an address that was confirmed by mail.'
      : me.totpEnabledAt === null
        ? 'Set up a second factor under Profile first: the second of two people has one.'
        : first && mailboxOf(first.email) === mailboxOf(me.email) ? 'Both accounts use the same mailbox, so they do not count as two people.' : ''
  if (because) throw new DomainError('not-allowed', { message: because })
}

export interface Holder { userId: string, email: string, siteIds: string[] }

/**
 * Who, besides these, holds a role that approves, with a password set; `former` also counts those who lost it within
 * 90 days, so that nobody becomes the only one by ending the others first.
 */
export async function othersWhoApprove(context: Pick<ServiceContext, 'clock'>, trx: Database | Trx, except: readonly (string | null)[], former = false): Promise<Holder[]> {
  const people = await trx.selectFrom('user').select(['id', 'email', 'deactivatedAt']).where('passwordHash', 'is not', null)
    .where(eb => eb.exists(eb.selectFrom('roleHolding').select('roleHolding.id').whereRef('roleHolding.userId', '=', 'user.id').where('role', 'in', rolesThatApprove))).execute()
  const since = new Date(context.clock().getTime() - FORMER_DAYS * DAY_MS)
  const counted = people.filter(person => !except.includes(person.id) && (person.deactivatedAt === null || (former && person.deactivatedAt > since.toISOString())))
  const holdings = (await allHoldings(trx, counted.map(person => person.id))).filter(holding => (rolesThatApprove as readonly string[]).includes(holding.role))
  const counts = (holding: (typeof holdings)[number]) => inForce(holding, context.clock()) || (former && holding.startsOn !== holding.endsOn && holding.endsOn !== null && holding.endsOn > since.toISOString().slice(0, 10) && holding.startsOn <= context.clock().toISOString().slice(0, 10))
  return counted.map(person => ({ userId: person.id, email: person.email, siteIds: holdings.filter(holding => holding.userId === person.id && counts(holding)).map(holding => holding.siteId) })).filter(person => person.siteIds.length > 0)
}
