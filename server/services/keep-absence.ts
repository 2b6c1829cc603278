import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { isAway } from '#server/database/queries/absences'
import { DomainError } from '#shared/errors'
import type { AbsenceInput } from '#shared/schemas/absence'
import { now, type ServiceContext } from './context'
import { currentHoldings } from './current-holdings'
import { organisationDay } from './organisation-day'
import { checkMayWriteEverywhere } from './people-rules'
import { recordAuditEvent } from './record-audit-event'

/**
 * Notes that a person is away and who covers: the other finds the studies of the absent reader among their own.
 * Everyone notes their own absence; an administrator of all the person's sites may do it for them.
 * @returns the id of the absence
 * @throws DomainError 'not-allowed', 'not-found', 'not-valid' (in the past, twice, or a cover who cannot read there or is away too)
 */
export async function addAbsence(context: ServiceContext, userId: string, input: AbsenceInput): Promise<string> {
  return await context.db.transaction().execute(async (trx) => {
    await checkMayKeep(context, trx, userId)
    await checkDays(context, trx, userId, input)
    await checkCover(context, trx, userId, input)
    const id = randomUUID()
    await trx.insertInto('absence').values({ id, userId, ...input, createdAt: now(context), createdBy: context.actor.userId! }).execute()
    await recordAuditEvent(context, trx, { name: 'absence.noted', subject: 'user', subjectId: userId, data: input })
    return id
  })
}

/** @throws DomainError 'not-found', 'not-allowed' */
export async function cancelAbsence(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const absence = await trx.selectFrom('absence').selectAll().where('id', '=', id).where('cancelledAt', 'is', null).executeTakeFirst()
    if (!absence) throw new DomainError('not-found')
    await checkMayKeep(context, trx, absence.userId)
    await trx.updateTable('absence').set({ cancelledAt: now(context) }).where('id', '=', id).execute()
    const { fromDay, toDay, coveredBy } = absence
    await recordAuditEvent(context, trx, { name: 'absence.cancelled', subject: 'user', subjectId: absence.userId, data: { fromDay, toDay, coveredBy } })
  })
}

/** People who hold a role that this person holds too, at a site of theirs: those who may cover. */
export async function possibleCovers(context: ServiceContext, userId: string): Promise<{ id: string, name: string }[]> {
  const held = await currentHoldings(context.db, [userId], context.clock())
  const others = await context.db.selectFrom('user').innerJoin('roleHolding', 'roleHolding.userId', 'user.id').select(['user.id', 'user.name']).distinct()
    .where('user.deactivatedAt', 'is', null).where('user.id', '!=', userId).where('roleHolding.siteId', 'in', held.map(holding => holding.siteId)).orderBy('user.name').execute()
  const theirs = await currentHoldings(context.db, others.map(other => other.id), context.clock())
  return others.filter(other => theirs.some(holding => holding.userId === other.id && sharesRole(holding, held)))
}

const sharesRole = (one: { siteId: string, role: string }, held: readonly { siteId: string, role: string }[]) => held.some(other => other.siteId === one.siteId && other.role === one.role)

async function checkMayKeep(context: ServiceContext, trx: Trx, userId: string): Promise<void> {
  if (context.actor.userId === userId) return
  const person = await trx.selectFrom('user').select('id').where('id', '=', userId).executeTakeFirst()
  if (!person) throw new DomainError('not-found')
  const held = await currentHoldings(trx, [userId], context.clock())
  if (held.length === 0) throw new DomainError('not-allowed')
  checkMayWriteEverywhere(context.actor, held, 'people.write')
}

async function checkDays(context: ServiceContext, trx: Trx, userId: string, input: AbsenceInput): Promise<void> {
  const refuse = (path: string, message: string) => new DomainError('not-valid', { fields: [{ path, message }] })
  if (input.toDay < await organisationDay({ db: trx, clock: context.clock })) throw refuse('toDay', 'The last day lies in the past.')
  if (await isAway(trx, userId, input)) throw refuse('fromDay', 'An absence is noted for some of these days already. Cancel it first.')
}

async function checkCover(context: ServiceContext, trx: Trx, userId: string, input: AbsenceInput): Promise<void> {
  const refuse = (message: string) => new DomainError('not-valid', { fields: [{ path: 'coveredBy', message }] })
  if (input.coveredBy === userId) throw refuse('Choose someone else.')
  const covers = await possibleCovers({ ...context, db: trx }, userId)
  if (!covers.some(person => person.id === input.coveredBy)) throw refuse('Choose a person who holds the same role at one of the same sites.')
  if (await isAway(trx, input.coveredBy, input)) throw refuse('This person is away on some of these days. Choose someone else.')
}
