import { randomUUID } from 'node:crypto'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import type { StudyQuestion } from '#server/database/tables/study-question'
import { techniqueOf } from '#shared/catalogue/nerves'
import { DomainError } from '#shared/errors'
import { OVERDUE_MINUTES, type answerSchema, type askSchema, type QuestionState } from '#shared/schemas/question'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { insertRun, usualSites } from './lay-out-runs'
import { recordAuditEvent } from './record-audit-event'

export const QUESTION_TASK = 'question-unanswered'

function me(context: ServiceContext): string {
  if (!context.actor.userId) throw new DomainError('not-signed-in')
  return context.actor.userId
}

const trailOf = (question: Pick<StudyQuestion, 'id' | 'runId'>) => ({ questionId: question.id, runId: question.runId })

/**
 * A question of the bench to the readers of the site, while the patient is there. When no reader is in the program it
 * becomes a task at once, and the asker learns so.
 * @param readersHere how many people who may answer have the program open now
 * @throws DomainError 'wrong-state' when the study is not being recorded, 'not-valid' when the run is not one of it
 */
export async function askReader(context: ServiceContext, { studyId, runId, question, readersHere }: z.infer<typeof askSchema> & { studyId: string, readersHere: number }): Promise<{ id: string, readersHere: number }> {
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, studyId)
    const run = runId ? await trx.selectFrom('studyRun').select('id').where('id', '=', runId).where('studyId', '=', studyId).where('removedAt', 'is', null).executeTakeFirst() : undefined
    if (runId && !run) throw new DomainError('not-valid', { fields: [{ path: 'runId', message: 'Choose a run of this study.' }] })
    const asked = await trx.insertInto('studyQuestion').values({ id: randomUUID(), studyId, siteId: study.siteId, runId, question, askedBy: me(context), askedAt: now(context), state: 'open', seenBy: null, seenAt: null, addedRunId: null, closedBy: null, closedAt: null, overdueAt: null }).returningAll().executeTakeFirstOrThrow()
    await recordAuditEvent(context, trx, { name: 'question.asked', ...aboutStudy(study), data: trailOf(asked) })
    if (readersHere === 0) await makeOverdue(context, trx, asked)
    return { id: asked.id, readersHere }
  })
}

/** The task that a question becomes: it names the study by its number and no person. */
async function makeOverdue(context: ServiceContext, trx: Trx, question: StudyQuestion): Promise<void> {
  const study = await trx.selectFrom('study').select(['id', 'number', 'siteId', 'patientId']).where('id', '=', question.studyId).executeTakeFirstOrThrow()
  await trx.updateTable('studyQuestion').set({ overdueAt: now(context) }).where('id', '=', question.id).execute()
  await createTask(context, trx, { kind: QUESTION_TASK, subject: 'question', subjectId: question.id, siteId: study.siteId, ownerRole: 'neurologist', sentence: `${study.number}: the bench asked a question and nobody has answered. The patient may still be there.` })
  await recordAuditEvent(context, trx, { name: 'question.overdue', ...aboutStudy(study), data: trailOf(question) })
}

/** Makes tasks of the questions that wait too long. Each once. */
export async function raiseOverdue(context: ServiceContext): Promise<number> {
  const before = new Date(context.clock().getTime() - OVERDUE_MINUTES * 60_000).toISOString()
  const waiting = await context.db.selectFrom('studyQuestion').select('id').where('state', '=', 'open').where('overdueAt', 'is', null).where('askedAt', '<=', before).execute()
  for (const { id } of waiting) {
    await context.db.transaction().execute(async (trx) => {
      const question = await trx.selectFrom('studyQuestion').selectAll().where('id', '=', id).where('state', '=', 'open').where('overdueAt', 'is', null).executeTakeFirst()
      if (question) await makeOverdue(context, trx, question)
    })
  }
  return waiting.length
}

/** The first reader who opens it: the bench sees that somebody looks. */
export async function noteQuestionSeen(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const seen = await trx.updateTable('studyQuestion').set({ seenBy: me(context), seenAt: now(context) }).where('id', '=', id).where('state', '=', 'open').where('seenAt', 'is', null).returningAll().executeTakeFirst()
    if (seen) await recordAuditEvent(context, trx, { name: 'question.seen', ...aboutStudy(await studyOf(trx, seen)), data: trailOf(seen) })
  })
}

const studyOf = (trx: Trx, { studyId }: StudyQuestion) => trx.selectFrom('study').select(['id', 'siteId', 'patientId']).where('id', '=', studyId).executeTakeFirstOrThrow()

/** Only one wins: an open question is closed, and its task with it. */
async function close(context: ServiceContext, trx: Trx, id: string, change: { state: Exclude<QuestionState, 'open'>, answer?: string, addedRunId?: string | null }): Promise<StudyQuestion> {
  const closed = await trx.updateTable('studyQuestion').set({ ...change, closedBy: me(context), closedAt: now(context) }).where('id', '=', id).where('state', '=', 'open').returningAll().executeTakeFirst()
  if (!closed) throw await whyNotOpen(trx, id)
  const task = await trx.updateTable('task').set({ doneAt: now(context), doneBy: me(context), resolution: change.state === 'answered' ? 'The question was answered.' : 'The question was taken back.' })
    .where('kind', '=', QUESTION_TASK).where('subjectId', '=', id).where('doneAt', 'is', null).returning(['id', 'siteId', 'kind']).executeTakeFirst()
  if (task) await recordAuditEvent(context, trx, { name: 'task.done', subject: 'task', subjectId: task.id, siteId: task.siteId, data: { kind: task.kind } })
  return closed
}

async function whyNotOpen(trx: Trx, id: string): Promise<DomainError> {
  const stands = await trx.selectFrom('studyQuestion').leftJoin('user', 'user.id', 'studyQuestion.closedBy').select(['state', 'user.name']).where('studyQuestion.id', '=', id).executeTakeFirst()
  if (!stands) return new DomainError('not-found')
  return new DomainError('wrong-state', { message: stands.state === 'answered' ? `${stands.name} answered this question meanwhile.` : 'The bench took this question back meanwhile.', details: { state: stands.state } })
}

/**
 * Answers in words, with a run added to the study's plan, or both; everything in one transaction.
 * @throws DomainError 'wrong-state' when somebody answered first, or when a run is to be added to a study that is not being recorded any more
 */
export async function answerQuestion(context: ServiceContext, { id, answer, addRun }: z.infer<typeof answerSchema> & { id: string }): Promise<{ addedRunId: string | null }> {
  return context.db.transaction().execute(async (trx) => {
    const open = await trx.selectFrom('studyQuestion').selectAll().where('id', '=', id).executeTakeFirst()
    if (!open) throw new DomainError('not-found')
    const addedRunId = addRun && open.state === 'open' ? await addPlannedRun(context, trx, open, addRun) : null
    const closed = await close(context, trx, id, { state: 'answered', answer, addedRunId })
    await recordAuditEvent(context, trx, { name: 'question.answered', ...aboutStudy(await studyOf(trx, closed)), data: { ...trailOf(closed), addedRunId } })
    return { addedRunId }
  })
}

/** Behind the run that was asked about, or at the end; it counts as planned, so that leaving it out needs a reason. */
async function addPlannedRun(context: ServiceContext, trx: Trx, question: StudyQuestion, { technique: techniqueId, side }: NonNullable<z.infer<typeof answerSchema>['addRun']>): Promise<string> {
  const technique = techniqueOf(techniqueId)
  if (!technique) throw new DomainError('not-valid', { fields: [{ path: 'technique', message: 'Choose a technique of the catalogue.' }] })
  const study = await editableStudy(trx, question.studyId)
  const runs = await trx.selectFrom('studyRun').select(['id', 'position']).where('studyId', '=', study.id).where('removedAt', 'is', null).orderBy('position').execute()
  const position = (runs.find(run => run.id === question.runId) ?? runs.at(-1))?.position ?? 0
  await trx.updateTable('studyRun').set(eb => ({ position: eb('position', '+', 1) })).where('studyId', '=', study.id).where('position', '>', position).execute()
  const runId = await insertRun(context, trx, { studyId: study.id, technique, side, position: position + 1, planned: true, sites: usualSites(technique) })
  await studyChanged(context, trx, study)
  await recordAuditEvent(context, trx, { name: 'study.run-added', ...aboutStudy(study), data: { runId, technique: techniqueId, side } })
  return runId
}

/** The bench needs no answer any more. */
export async function withdrawQuestion(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const closed = await close(context, trx, id, { state: 'withdrawn' })
    await recordAuditEvent(context, trx, { name: 'question.withdrawn', ...aboutStudy(await studyOf(trx, closed)), data: trailOf(closed) })
  })
}
