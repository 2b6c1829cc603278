import { randomUUID } from 'node:crypto'
import type * as z from 'zod'
import { DomainError } from '#shared/errors'
import type { visitSchema, LaterEntryInput } from '#shared/schemas/bench-day'
import type { RunSettings } from '#server/database/queries/studies'
import type { Trx } from '#server/database/connection'
import { refusePacingWire } from './ask-cautions'
import { now, type ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { recordAuditEvent } from './record-audit-event'
import { instantOf, localDate } from './site-time'

const zoneOf = async (trx: Trx, siteId: string) => (await trx.selectFrom('site').select('timeZone').where('id', '=', siteId).executeTakeFirstOrThrow()).timeZone

/**
 * The patient comes a second time: the same study goes on, so that both days are judged and reported together. Identity
 * and cautions are confirmed anew. Each run keeps the moment of its first value; a temperature serves only the runs of
 * its own visit, so that a limb without a reading today is not called warm by the one of last week.
 * @throws DomainError 'wrong-state' on the day of an earlier visit, or when nothing was recorded yet
 */
export async function startVisit(context: ServiceContext, { id, reason, identifiers, cautionsRead }: z.output<typeof visitSchema> & { id: string }): Promise<{ day: string }> {
  if (new Set(identifiers).size < 2) throw new DomainError('not-valid', { fields: [{ path: 'identifiers', message: 'Confirm two different identifiers.' }] })
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const day = localDate(context.clock(), await zoneOf(trx, study.siteId))
    const last = await trx.selectFrom('studyVisit').select('day').where('studyId', '=', id).orderBy('startedAt', 'desc').executeTakeFirst()
    if (day <= (last?.day ?? study.studyDate)) throw new DomainError('wrong-state', { message: 'The study is of today already. A further visit begins on a later day.' })
    const { cautionsJson } = await trx.selectFrom('referral').select('cautionsJson').where('id', '=', study.referralId).executeTakeFirstOrThrow()
    refusePacingWire(cautionsJson)
    const [visitId, startedAt] = [randomUUID(), now(context)]
    const confirmation = { identifiers, cautionsRead, at: startedAt, byName: context.actor.label }
    await trx.insertInto('studyVisit').values({ id: visitId, studyId: id, day, startedAt, reason, technologistId: context.actor.userId, confirmationJson: JSON.stringify(confirmation) }).execute()
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.visit-started', ...aboutStudy(study), data: { visitId, day, identifiers } })
    return { day }
  })
}

/** The moment that stood on the paper holds for runs that have values, and for those that are typed from now on (save-cells). */
async function dateRuns(trx: Trx, studyId: string, measuredAt: string): Promise<void> {
  const runs = await trx.selectFrom('studyRun').select(['id', 'settingsJson', 'revision']).where('studyId', '=', studyId).where('removedAt', 'is', null).execute()
  for (const run of runs) {
    const settings = JSON.parse(run.settingsJson) as RunSettings
    if (settings.recordedAt) await trx.updateTable('studyRun').set({ settingsJson: JSON.stringify({ ...settings, recordedAt: measuredAt }), revision: run.revision + 1 }).where('id', '=', run.id).execute()
  }
}

/**
 * The values were written on paper and are entered later: who measured, when, and why. The study then is of the day on
 * which it was measured, since age and limits depend on it.
 * @throws DomainError 'not-valid' for a moment that has not come yet
 */
export async function noteLaterEntry(context: ServiceContext, { id, date, time, measuredBy, reason }: LaterEntryInput & { id: string }): Promise<{ measuredAt: string }> {
  const enteredBy = context.actor.userId
  if (!enteredBy) throw new DomainError('not-signed-in')
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const measured = instantOf(date, time, await zoneOf(trx, study.siteId))
    if (measured > context.clock()) throw new DomainError('not-valid', { fields: [{ path: 'time', message: 'This moment has not come yet. Enter when it was measured.' }] })
    const visits = await trx.selectFrom('studyVisit').select('id').where('studyId', '=', id).executeTakeFirst()
    if (visits) throw new DomainError('wrong-state', { message: 'This study has several visits. Enter the sheet of one visit as a study of its own.' })
    const before = await trx.selectFrom('studyLaterEntry').select('measuredAt').where('studyId', '=', id).executeTakeFirst()
    const measuredAt = measured.toISOString()
    const values = { measuredAt, measuredBy, reason, enteredAt: now(context), enteredBy }
    await trx.insertInto('studyLaterEntry').values({ studyId: id, ...values }).onConflict(conflict => conflict.column('studyId').doUpdateSet(values)).execute()
    await trx.updateTable('study').set({ studyDate: date, startedAt: measuredAt }).where('id', '=', id).execute()
    await dateRuns(trx, id, measuredAt)
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.later-entry', ...aboutStudy(study), data: { measuredAt, before: before?.measuredAt ?? null } })
    return { measuredAt }
  })
}
