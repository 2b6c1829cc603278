import { randomUUID } from 'node:crypto'
import { sql } from 'kysely'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import type { RunSettings } from '#server/database/queries/studies'
import type { StudyTemperature } from '#server/database/tables/study-temperature'
import { techniqueOf } from '#shared/catalogue/nerves'
import { DomainError } from '#shared/errors'
import type { addTemperatureSchema } from '#shared/schemas/bench'
import type { LimbTemperature } from '#shared/schemas/study'
import { now, type ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { isEmptyRun } from './lay-out-runs'
import { recordAuditEvent } from './record-audit-event'

type Limb = Pick<StudyTemperature, 'studyId' | 'segment' | 'side'>

async function runsOfLimb(trx: Trx, limb: Limb) {
  const runs = await trx.selectFrom('studyRun').select(['id', 'technique', 'settingsJson', 'revision']).where('studyId', '=', limb.studyId).where('side', '=', limb.side).where('removedAt', 'is', null).execute()
  return runs.filter(run => techniqueOf(run.technique)?.temperatureSegment === limb.segment).map(run => ({ ...run, settings: JSON.parse(run.settingsJson) as RunSettings }))
}

async function setTemperature(trx: Trx, run: { id: string, settings: RunSettings, revision: number }, temperatureId: string | undefined): Promise<void> {
  await trx.updateTable('studyRun').set({ settingsJson: JSON.stringify({ ...run.settings, temperatureId }), revision: run.revision + 1 }).where('id', '=', run.id).execute()
}

/** A run without a reading of its own follows the latest of its limb: what was recorded before a new reading stays with the one before. */
async function bindEarlierRuns(trx: Trx, limb: Limb, earlier: StudyTemperature | undefined, at: string): Promise<string[]> {
  if (!earlier || earlier.at > at) return []
  const bound: string[] = []
  for (const run of await runsOfLimb(trx, limb)) {
    if (run.settings.temperatureId || await isEmptyRun(trx, run.id)) continue
    await setTemperature(trx, run, earlier.id)
    bound.push(run.id)
  }
  return bound
}

/** A limb's skin temperature in °C, to one decimal. */
export async function addTemperature(context: ServiceContext, { id, ...input }: z.infer<typeof addTemperatureSchema> & { id: string }): Promise<LimbTemperature> {
  if (Math.abs(input.celsius * 10 - Math.round(input.celsius * 10)) > 1e-6) throw new DomainError('not-valid', { fields: [{ path: 'celsius', message: 'Enter at most one decimal.' }] })
  const savedBy = context.actor.userId
  if (!savedBy) throw new DomainError('not-signed-in')
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const { segment, side, celsius, method, warmed } = input
    const at = input.at ? new Date(input.at).toISOString() : now(context)
    const earlier = await trx.selectFrom('studyTemperature').selectAll().where('studyId', '=', id).where('segment', '=', segment).where('side', '=', side).where('removedAt', 'is', null).orderBy('at', 'desc').orderBy(sql`rowid`, 'desc').executeTakeFirst()
    const temperatureId = randomUUID()
    const boundRuns = await bindEarlierRuns(trx, { studyId: id, segment, side }, earlier, at)
    await trx.insertInto('studyTemperature').values({ id: temperatureId, studyId: id, segment, side, celsius, at, method, warmed: warmed ? 1 : 0, removedAt: null, savedBy }).execute()
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.temperature-added', ...aboutStudy(study), data: { temperatureId, segment, side, celsius, boundRuns } })
    return { id: temperatureId, segment, side, celsius, at, method, warmed }
  })
}

/** Takes a mistaken reading away; runs that were bound to it follow the latest of their limb again. */
export async function removeTemperature(context: ServiceContext, { id, temperatureId }: { id: string, temperatureId: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const reading = await trx.updateTable('studyTemperature').set({ removedAt: now(context) }).where('id', '=', temperatureId).where('studyId', '=', id).where('removedAt', 'is', null).returningAll().executeTakeFirst()
    if (!reading) throw new DomainError('not-found')
    for (const run of await runsOfLimb(trx, reading)) {
      if (run.settings.temperatureId === temperatureId) await setTemperature(trx, run, undefined)
    }
    await studyChanged(context, trx, study)
    const { segment, side, celsius } = reading
    await recordAuditEvent(context, trx, { name: 'study.temperature-removed', ...aboutStudy(study), data: { temperatureId, segment, side, celsius } })
  })
}
