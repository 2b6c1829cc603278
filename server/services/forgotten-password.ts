import type { Trx } from '#server/database/connection'
import type { User } from '#server/database/tables/user'
import { endLinks, insertLink, LINK, linkHours } from './account-links'
import { actingAs, type ServiceContext } from './context'
import { createTask } from './create-task'
import { currentHoldings } from './current-holdings'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'
import { isSigner, mailLink } from './set-up-link'
import { countReset } from './sign-in-limits'

type Outcome = 'mailed' | 'two people needed' | 'address not confirmed' | 'no such account'

/**
 * Somebody forgot the password. A link goes to the mailbox of an account whose address was confirmed; the second factor
 * stays. An account that signs gets no link, since two people have to ask for it: its owner is told so by mail, and the
 * administrators by a task. Nothing of this shows in the answer, which is the same for an address without an account.
 * @param address the caller's network address, for the trail
 * @throws nothing that tells accounts apart; what is asked for too often is left alone in silence
 */
export async function askForReset(context: ServiceContext, { email, address }: { email: string, address: string }): Promise<void> {
  if (!await countReset(context.db, context.keys.tokenHash(`reset:${email.toLowerCase()}`))) return
  const acting = actingAs(context, { userId: null, label: 'nobody signed in', holdings: [] })
  await context.db.transaction().execute(async (trx) => {
    const person = await trx.selectFrom('user').selectAll().where('email', '=', email.toLowerCase()).where('deactivatedAt', 'is', null).where('passwordHash', 'is not', null).executeTakeFirst()
    const outcome = person ? await answerPerson(acting, trx, person) : 'no such account'
    await recordAuditEvent(acting, trx, { name: 'account.reset-asked', subject: 'user', subjectId: person?.id ?? 'unknown', data: { address, outcome } })
  })
}

async function answerPerson(context: ServiceContext, trx: Trx, person: User): Promise<Outcome> {
  const signs = await isSigner(trx, person.id)
  if (signs || person.emailConfirmedAt === null) {
    await askAdministrators(context, trx, person, signs)
    if (!signs) return 'address not confirmed'
    const organisation = await trx.selectFrom('organisation').select('name').executeTakeFirstOrThrow()
    await queueMail(context, trx, { template: 'account-notice', toAddress: person.email, data: { about: 'two-people-needed', organisation: organisation.name } })
    return 'two people needed'
  }
  await endLinks(trx, person.id)
  const { token } = await insertLink(context, trx, { purpose: LINK, personId: person.id, hours: linkHours.reset, data: { resetSecondFactor: false, askedBy: null, mailedTo: person.email } })
  await mailLink(context, trx, { toAddress: person.email, token, hours: linkHours.reset, about: 'reset' })
  return 'mailed'
}

async function askAdministrators(context: ServiceContext, trx: Trx, person: User, signs: boolean): Promise<void> {
  const [holding] = await currentHoldings(trx, [person.id], context.clock())
  if (!holding) return
  await createTask(context, trx, { kind: 'password-forgotten', subject: 'person', subjectId: person.id, siteId: holding.siteId, ownerRole: 'administrator', sentence: `A new password was asked for by or for ${person.name}. Make sure by telephone who asked; ${signs ? 'two people make the set-up link, since the account signs' : 'hand over a set-up link, since the address was never confirmed'}.` })
}
