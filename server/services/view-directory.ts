import { directoryNamesakes, physiciansAt, practiceById, practicePage, waitingDeliveries } from '#server/database/queries/directory'
import { sitesUsing } from '#server/database/queries/practice-use'
import { recipientById } from '#server/database/queries/recipients'
import type { Practice } from '#server/database/tables/practice'
import { DomainError } from '#shared/errors'
import type { Page } from '#shared/schemas/common'
import type { OpenCode, PassphraseState, PhysicianDetail, PracticeRow, PracticeView } from '#shared/schemas/directory'
import { resolveDelivery } from './change-delivery'
import { mayAt, sitesWhere, type ServiceContext } from './context'
import { organisationDay } from './organisation-day'
import { mostTries, openCodes, type CodeData } from './verify-address'

type Entry = Awaited<ReturnType<typeof physiciansAt>>[number]

const passphraseState = (practice: Practice): PassphraseState => practice.passphraseSealed === null ? 'none' : practice.passphraseHandedOverAt === null ? 'made' : 'handed-over'

export async function listPractices(context: ServiceContext, query: { search: string, show: 'all' | 'to-do' | 'same-name', page: number, pageSize: number }): Promise<Page<PracticeRow>> {
  const { rows, total, people } = await practicePage(context.db, { ...query, today: await organisationDay(context) })
  return {
    rows: rows.map(row => ({
      id: row.id, name: row.name, town: row.town, phone: row.phone, deliveryMethod: row.deliveryMethod, passphrase: passphraseState(row), closed: row.closedAt !== null,
      physicians: people.filter(person => person.practiceId === row.id).map(({ id, name, emailVerifiedAt, left }) => ({ id, name, emailVerified: emailVerifiedAt !== null, left: left === 1 })),
    })),
    total, page: query.page, pageSize: query.pageSize,
  }
}

/** @throws DomainError 'not-found' */
export async function viewPractice(context: ServiceContext, id: string): Promise<PracticeView> {
  const practice = await practiceById(context.db, id)
  if (!practice) throw new DomainError('not-found')
  const today = await organisationDay(context)
  const sites = await sitesUsing(context.db, id)
  const people = await physiciansAt(context.db, [id], today)
  const waiting = await waitingDeliveries(context.db, people.map(person => person.id), sitesWhere(context.actor, 'delivery.manage'))
  const physicians: PhysicianDetail[] = []
  for (const person of people) physicians.push({ ...await detailOf(context, person, today), waiting: waiting.filter(delivery => delivery.physicianId === person.id).length })
  return {
    id, name: practice.name, town: practice.town, address: practice.address, phone: practice.phone, deliveryMethod: practice.deliveryMethod, closed: practice.closedAt !== null,
    passphrase: { state: passphraseState(practice), madeAt: practice.passphraseMadeAt, handedOverOn: practice.passphraseHandedOverOn, by: practice.passphraseHandedOverBy, to: practice.passphraseHandedOverTo },
    delegates: await context.db.selectFrom('practiceDelegate').select(['id', 'name', 'duty', 'phone']).where('practiceId', '=', id).where('endedAt', 'is', null).orderBy('name').execute(),
    usedBy: sites.map(site => site.name), mayChange: sites.length === 0 || sites.some(site => mayAt(context.actor, 'directory.write', site.id)),
    physicians,
  }
}

async function detailOf(context: ServiceContext, person: Entry, today: string): Promise<Omit<PhysicianDetail, 'waiting'>> {
  const { id, name, title, email, phone, leftOn, emailVerifiedAt, emailVerifiedBy, emailVerifiedNote, userId, accountEmail, hasPassword, deactivatedAt } = person
  return {
    id, name, title, email, phone, leftOn, left: person.left === 1,
    verified: emailVerifiedAt === null ? null : { at: emailVerifiedAt, by: emailVerifiedBy, note: emailVerifiedNote },
    code: emailVerifiedAt === null ? await codeOf(context, id) : null,
    namesakes: await directoryNamesakes(context.db, { name, exceptId: id, today }),
    access: userId === null ? null : { userId, email: accountEmail ?? '', hasPassword: hasPassword === 1, deactivated: deactivatedAt !== null },
    because: (await recipientById(context.db, id, today))?.because ?? '',
  }
}

/** What became of the code that was mailed last, without the code. */
async function codeOf(context: ServiceContext, physicianId: string): Promise<OpenCode | null> {
  const link = await openCodes(context.db, physicianId).executeTakeFirst()
  if (!link) return null
  const data = JSON.parse(link.dataJson) as CodeData
  const mail = await context.db.selectFrom('outboxMail').select('state').where('id', '=', data.mailId).executeTakeFirst()
  const failed = ['given-up', 'bounced', 'uncertain', 'failed'].includes(mail?.state ?? '')
  return { sentAt: link.createdAt, expiresAt: link.expiresAt, mail: mail?.state === 'sent' ? 'sent' : failed ? 'failed' : 'waiting', triesLeft: Math.max(0, mostTries - data.tries) }
}

/**
 * Sends what could not be mailed to this physician before, at the sites where the actor manages deliveries.
 * @returns how many were put back into the outbox
 * @throws DomainError 'not-found' · 'not-valid' while they still cannot be mailed
 */
export async function sendWaiting(context: ServiceContext, physicianId: string): Promise<{ sent: number }> {
  const recipient = await recipientById(context.db, physicianId, await organisationDay(context))
  if (!recipient) throw new DomainError('not-found')
  if (!recipient.reachable) throw new DomainError('not-valid', { message: `Nothing can be mailed to this physician yet: ${recipient.because}.` })
  const waiting = await waitingDeliveries(context.db, [physicianId], sitesWhere(context.actor, 'delivery.manage'))
  for (const { id } of waiting) await resolveDelivery(context, { id, outcome: 'send-again', note: 'the directory entry was completed' })
  return { sent: waiting.length }
}
