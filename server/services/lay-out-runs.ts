import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { RunSettings } from '#server/database/queries/studies'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { Technique } from '#shared/catalogue/types'
import { plannedRuns, type PlannedRun } from '#shared/protocols'
import type { ReferralSide, Side } from '#shared/schemas/common'
import { keptProtocol } from './protocols'
import { now, type ServiceContext } from './context'

/** The technique's own habits; the technologist says where it was done otherwise. */
export function usualSettings({ direction, amplitudeDefinition, shortSegments }: Technique): RunSettings {
  return { ...(direction ? { direction } : {}), ...(amplitudeDefinition ? { amplitudeDefinition } : {}), ...(shortSegments ? { shortSegments } : {}) }
}

/** The stimulation sites that stand ready when a run is added. */
export function usualSites(technique: Technique): string[] {
  const usual = technique.sites.filter(site => site.usual)
  return (usual.length ? usual : technique.sites.slice(0, 1)).map(site => site.id)
}

export interface NewRun { studyId: string, technique: Technique, side: Side, position: number, planned: boolean, sites: readonly string[], settings?: RunSettings }

export async function insertRun(context: ServiceContext, trx: Trx, run: NewRun): Promise<string> {
  const id = randomUUID()
  await trx.insertInto('studyRun').values({ id, studyId: run.studyId, technique: run.technique.id, side: run.side, position: run.position, planned: run.planned ? 1 : 0, settingsJson: JSON.stringify({ ...usualSettings(run.technique), ...run.settings }), removedAt: null, createdAt: now(context), createdBy: context.actor.userId }).execute()
  if (run.sites.length) await trx.insertInto('studyRow').values(run.sites.map((site, index) => ({ id: randomUUID(), runId: id, site, position: index + 1, removedAt: null }))).execute()
  return id
}

/** True while no cell of the run holds anything. */
export async function isEmptyRun(trx: Trx, runId: string): Promise<boolean> {
  const cell = await trx.selectFrom('studyCell').innerJoin('studyRow', 'studyRow.id', 'studyCell.rowId').select('field').where('runId', '=', runId).where('studyRow.removedAt', 'is', null).where('entryJson', '<>', 'null').executeTakeFirst()
  return cell === undefined
}

/**
 * Lays out what the protocol plans for the confirmed side: adds what is not there, and takes away planned runs of the
 * other side that nobody has written in. Runs with values always stay.
 */
export async function layOutRuns(context: ServiceContext, trx: Trx, study: { id: string }, side: ReferralSide | null): Promise<void> {
  const wanted = plannedRuns(await keptProtocol(trx, study.id), side)
  const there = await trx.selectFrom('studyRun').selectAll().where('studyId', '=', study.id).where('removedAt', 'is', null).orderBy('position').execute()
  const isSame = (a: PlannedRun) => (b: PlannedRun) => a.technique === b.technique && a.side === b.side
  for (const run of there) {
    if (run.planned === 1 && !wanted.some(isSame(run)) && await isEmptyRun(trx, run.id)) await trx.updateTable('studyRun').set({ removedAt: now(context) }).where('id', '=', run.id).execute()
  }
  let position = there.at(-1)?.position ?? 0
  for (const run of wanted.filter(run => !there.some(isSame(run)))) {
    const technique = techniqueOf(run.technique)
    if (technique) await insertRun(context, trx, { studyId: study.id, technique, side: run.side, position: ++position, planned: true, sites: usualSites(technique) })
  }
}
