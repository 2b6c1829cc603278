import type { Side } from '#shared/schemas/common'
import type { QuestionView } from '#shared/schemas/question'
import type { Database } from '../connection'

function questions(db: Database) {
  return db.selectFrom('studyQuestion as q')
    .innerJoin('study', 'study.id', 'q.studyId').innerJoin('site', 'site.id', 'q.siteId').innerJoin('user as asker', 'asker.id', 'q.askedBy')
    .leftJoin('user as seer', 'seer.id', 'q.seenBy').leftJoin('user as closer', 'closer.id', 'q.closedBy')
    .leftJoin('studyRun as run', join => join.onRef('run.id', '=', 'q.runId').on('run.removedAt', 'is', null))
    .leftJoin('studyRun as added', join => join.onRef('added.id', '=', 'q.addedRunId').on('added.removedAt', 'is', null))
    .select(['q.id', 'q.studyId', 'study.number as studyNumber', 'q.siteId', 'site.name as siteName', 'q.runId', 'q.question', 'q.askedAt', 'q.state', 'q.seenAt', 'q.answer', 'q.addedRunId', 'q.closedAt',
      'asker.name as askedBy', 'seer.name as seenBy', 'closer.name as closedBy', 'run.technique as runTechnique', 'run.side as runSide', 'added.technique as addedTechnique', 'added.side as addedSide'])
    .orderBy('q.askedAt').orderBy('q.id')
}
type Row = Awaited<ReturnType<ReturnType<typeof questions>['execute']>>[number]

const runOf = (technique: string | null, side: string | null) => technique && side ? { technique, side: side as Side } : null

function viewOf({ runTechnique, runSide, addedTechnique, addedSide, ...row }: Row): QuestionView {
  return { ...row, run: runOf(runTechnique, runSide), addedRun: runOf(addedTechnique, addedSide) }
}

/** Every question of one study, the oldest first. */
export async function questionsOfStudy(db: Database, studyId: string): Promise<QuestionView[]> {
  return (await questions(db).where('q.studyId', '=', studyId).execute()).map(viewOf)
}

/** What waits for an answer at these sites. */
export async function openQuestions(db: Database, siteIds: readonly string[]): Promise<QuestionView[]> {
  return (await questions(db).where('q.state', '=', 'open').where('q.siteId', 'in', siteIds).execute()).map(viewOf)
}

export async function questionView(db: Database, id: string): Promise<QuestionView | undefined> {
  const row = await questions(db).where('q.id', '=', id).executeTakeFirst()
  return row && viewOf(row)
}

export async function siteOfQuestion(db: Database, id: string): Promise<string | null> {
  return (await db.selectFrom('studyQuestion').select('siteId').where('id', '=', id).executeTakeFirst())?.siteId ?? null
}
