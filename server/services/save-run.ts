import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import type { RunSettings } from '#server/database/queries/studies'
import type { StudyRun } from '#server/database/tables/study-run'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { Technique } from '#shared/catalogue/types'
import { DomainError, type FieldError } from '#shared/errors'
import type { addRunSchema, changeRunSchema } from '#shared/schemas/bench'
import type { Side } from '#shared/schemas/common'
import { changedFields } from './changed-fields'
import { now, type ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { insertRun, isEmptyRun, usualSites } from './lay-out-runs'
import { recordAuditEvent } from './record-audit-event'

const wrong = (path: string, message: string) => new DomainError('not-valid', { fields: [{ path, message }] })

export async function runIn(trx: Trx, studyId: string, runId: string): Promise<StudyRun> {
  const run = await trx.selectFrom('studyRun').selectAll().where('id', '=', runId).where('studyId', '=', studyId).where('removedAt', 'is', null).executeTakeFirst()
  if (!run) throw new DomainError('not-found')
  return run
}

/** A repeat, and the same technique of the other side, get the stimulation sites that are there already; else the usual ones. */
async function sitesFor(trx: Trx, studyId: string, technique: Technique, repeats: string | undefined): Promise<string[]> {
  const like = await trx.selectFrom('studyRun').select('id').where('studyId', '=', studyId).where('technique', '=', technique.id).where('removedAt', 'is', null)
    .$if(repeats !== undefined, query => query.where('id', '=', repeats ?? '')).orderBy('position', 'desc').executeTakeFirst()
  const rows = like ? await trx.selectFrom('studyRow').select('site').where('runId', '=', like.id).where('removedAt', 'is', null).orderBy('position').execute() : []
  return rows.length ? rows.map(row => row.site) : usualSites(technique)
}

async function checkRepeats(trx: Trx, studyId: string, run: { technique: string, side: Side, id?: string }, repeats: string): Promise<void> {
  const earlier = await trx.selectFrom('studyRun').select(['technique', 'side']).where('id', '=', repeats).where('studyId', '=', studyId).where('removedAt', 'is', null).executeTakeFirst()
  if (!earlier || repeats === run.id || earlier.technique !== run.technique || earlier.side !== run.side) throw wrong('repeats', 'A repeat must be of the same technique and side in this study.')
}

/** More than any patient bears, and what the bench is measured with twice over. */
export const MOST_RUNS = 80

async function checkRoom(trx: Trx, studyId: string): Promise<void> {
  const { count } = await trx.selectFrom('studyRun').select(eb => eb.fn.countAll<number>().as('count')).where('studyId', '=', studyId).where('removedAt', 'is', null).executeTakeFirstOrThrow()
  if (count >= MOST_RUNS) throw wrong('technique', `A study has at most ${MOST_RUNS} runs. Take a blank run away, or go on in a second study.`)
}

/** Makes room behind a run, or at the end. */
async function positionAfter(trx: Trx, studyId: string, afterRunId: string | undefined): Promise<number> {
  const runs = await trx.selectFrom('studyRun').select(['id', 'position']).where('studyId', '=', studyId).where('removedAt', 'is', null).orderBy('position').execute()
  const after = runs.find(run => run.id === afterRunId) ?? runs.at(-1)
  const position = (after?.position ?? 0) + 1
  await trx.updateTable('studyRun').set(eb => ({ position: eb('position', '+', 1) })).where('studyId', '=', studyId).where('position', '>=', position).execute()
  return position
}

/** Adds a run with its stimulation sites. Adding a technique of one side for the other mirrors its sites, never its values. */
export async function addRun(context: ServiceContext, { id, technique: techniqueId, side, repeats, afterRunId }: z.infer<typeof addRunSchema> & { id: string }): Promise<{ runId: string }> {
  const technique = techniqueOf(techniqueId)
  if (!technique) throw wrong('technique', 'Choose a technique of the catalogue.')
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id, { actorId: context.actor.userId, technique: techniqueId })
    await checkRoom(trx, id)
    if (repeats) await checkRepeats(trx, id, { technique: techniqueId, side }, repeats)
    const sites = await sitesFor(trx, id, technique, repeats)
    const position = await positionAfter(trx, id, afterRunId ?? repeats)
    const runId = await insertRun(context, trx, { studyId: id, technique, side, position, planned: false, sites, settings: repeats ? { repeats } : {} })
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.run-added', ...aboutStudy(study), data: { runId, technique: techniqueId, side } })
    return { runId }
  })
}

async function checkSettings(trx: Trx, run: StudyRun, change: RunSettings): Promise<void> {
  if (change.repeats) await checkRepeats(trx, run.studyId, run, change.repeats)
  if (!change.temperatureId) return
  const reading = await trx.selectFrom('studyTemperature').select(['segment', 'side']).where('id', '=', change.temperatureId).where('studyId', '=', run.studyId).where('removedAt', 'is', null).executeTakeFirst()
  if (!reading || reading.side !== run.side || reading.segment !== techniqueOf(run.technique)?.temperatureSegment) throw wrong('temperatureId', 'Choose a temperature of the same limb and side.')
}

/**
 * Changes what of a run is not a cell. An empty `notDoneBecause` takes the reason away.
 * @throws DomainError 'changed-meanwhile' with `details.theirs`
 */
export async function changeRun(context: ServiceContext, { id, runId, revision, ...change }: z.infer<typeof changeRunSchema> & { id: string, runId: string }): Promise<{ revision: number }> {
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const run = await runIn(trx, id, runId)
    const before = JSON.parse(run.settingsJson) as RunSettings
    if (run.revision !== revision) throw new DomainError('changed-meanwhile', { details: { theirs: { ...before, revision: run.revision } } })
    await checkSettings(trx, run, change)
    const changes = changedFields(before, change)
    if (changes.length === 0) return { revision }
    const { notDoneBecause, ...after } = { ...before, ...change }
    const settings = notDoneBecause ? { ...after, notDoneBecause } : after
    await trx.updateTable('studyRun').set({ settingsJson: JSON.stringify(settings), revision: revision + 1 }).where('id', '=', runId).execute()
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.run-changed', ...aboutStudy(study), data: { runId, changes } })
    return { revision: revision + 1 }
  })
}

/**
 * Takes a run away. One with values, or one that the protocol plans, only with a reason: nothing measured and nothing
 * asked for vanishes silently. Its values stay in the database.
 */
export async function removeRun(context: ServiceContext, { id, runId, reason }: { id: string, runId: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const run = await runIn(trx, id, runId)
    const study = await editableStudy(trx, id, { actorId: context.actor.userId, technique: run.technique })
    const needsReason: FieldError[] = run.planned === 1 || !await isEmptyRun(trx, runId) ? [{ path: 'reason', message: run.planned === 1 ? 'The protocol plans this run. Say why it is removed.' : 'The run has values. Say why it is removed.' }] : []
    if (needsReason.length && reason.length < 3) throw new DomainError('not-valid', { fields: needsReason })
    await trx.updateTable('studyRun').set({ removedAt: now(context) }).where('id', '=', runId).execute()
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.run-removed', ...aboutStudy(study), data: { runId, technique: run.technique, side: run.side, reason } })
  })
}
