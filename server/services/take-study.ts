import { awayOn } from '#server/database/queries/absences'
import type { Database, Trx } from '#server/database/connection'
import type { Study } from '#server/database/tables/study'
import { DomainError } from '#shared/errors'
import { roleMay, type Role } from '#shared/permissions'
import type { PossibleReader } from '#shared/schemas/reading'
import { now, type ServiceContext } from './context'
import { currentHoldings } from './current-holdings'
import { aboutStudy } from './editable-study'
import { moveState } from './move-state'
import { organisationDay } from './organisation-day'
import { recordAuditEvent } from './record-audit-event'

/** @throws DomainError 'not-found', or 'wrong-state' when it does not wait for a reader */
export async function studyToRead(trx: Trx, id: string): Promise<Study> {
  const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  if (study.state === 'read') throw new DomainError('already-signed')
  if (study.state !== 'handed-over' && study.state !== 'returned') throw new DomainError('wrong-state', { details: { state: study.state } })
  return study
}

/** Takes a study to read, or over from a reader who is away; the trail keeps from whom. */
export async function takeStudy(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, id)
    if (study.readerId === context.actor.userId) return
    await trx.updateTable('study').set({ readerId: context.actor.userId, takenAt: now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.taken', ...aboutStudy(study), data: { from: study.readerId } })
  })
}

/** Gives it back to the queue; the draft stays. */
export async function releaseStudy(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, id)
    if (study.readerId === null) return
    if (study.readerId !== context.actor.userId) throw new DomainError('wrong-state', { message: 'Another reader has this study. Take it over first.' })
    await trx.updateTable('study').set({ readerId: null, takenAt: null }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.released', ...aboutStudy(study), data: {} })
  })
}

/**
 * Back to the bench with a question, perhaps about one run. The reader keeps the study and the draft.
 * @throws DomainError 'not-valid' when the run is not one of the study, 'wrong-state'
 */
export async function returnStudy(context: ServiceContext, { id, question, runId }: { id: string, question: string, runId: string | null }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, id)
    const run = runId ? await trx.selectFrom('studyRun').select('id').where('id', '=', runId).where('studyId', '=', id).where('removedAt', 'is', null).executeTakeFirst() : undefined
    if (runId && !run) throw new DomainError('not-valid', { fields: [{ path: 'runId', message: 'Choose a run of this study.' }] })
    await moveState(context, trx, { subject: 'study', id, from: 'handed-over', to: 'returned', reason: question })
    await trx.updateTable('study').set({ returnQuestion: question, returnRunId: runId, readerId: study.readerId ?? context.actor.userId, takenAt: study.takenAt ?? now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.returned', ...aboutStudy(study), data: { runId } })
  })
}

/** Gives a study to a reader of its site, also one that somebody else has; the draft stays. */
export async function assignStudy(context: ServiceContext, { id, readerId }: { id: string, readerId: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, id)
    const reader = (await readersAt(context, trx, study.siteId)).find(person => person.id === readerId)
    if (!reader) throw new DomainError('not-valid', { fields: [{ path: 'readerId', message: 'Choose a person who reads at this site.' }] })
    if (study.readerId === readerId) return
    await trx.updateTable('study').set({ readerId, takenAt: now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'study.assigned', ...aboutStudy(study), data: { from: study.readerId, to: readerId } })
  })
}

/** @throws DomainError 'not-found' */
export async function possibleReaders(context: ServiceContext, id: string): Promise<PossibleReader[]> {
  const study = await context.db.selectFrom('study').select('siteId').where('id', '=', id).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  const people = await readersAt(context, context.db, study.siteId)
  const away = await awayOn(context.db, people.map(person => person.id), await organisationDay(context))
  return people.map(({ id: personId, name }) => ({ id: personId, name, away: away.has(personId) }))
}

async function readersAt(context: ServiceContext, db: Database | Trx, siteId: string): Promise<{ id: string, name: string }[]> {
  const people = await db.selectFrom('user').innerJoin('roleHolding', 'roleHolding.userId', 'user.id').select(['user.id', 'user.name']).distinct()
    .where('user.deactivatedAt', 'is', null).where('roleHolding.siteId', '=', siteId).orderBy('user.name').execute()
  const held = await currentHoldings(db, people.map(person => person.id), context.clock())
  return people.filter(person => held.some(holding => holding.userId === person.id && holding.siteId === siteId && roleMay(holding.role as Role, 'report.write')))
}
