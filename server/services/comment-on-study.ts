import { randomUUID } from 'node:crypto'
import type { CommentView } from '#shared/schemas/bench-day'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { recordAuditEvent } from './record-audit-event'

/**
 * A comment of the bench or the reader, on the study or on one of its runs. It stays as written: who wants to say more
 * writes another one.
 */
export async function commentOnStudy(context: ServiceContext, { id, text, runId }: { id: string, text: string, runId: string | null }): Promise<CommentView> {
  const byUserId = context.actor.userId
  if (!byUserId) throw new DomainError('not-signed-in')
  return context.db.transaction().execute(async (trx) => {
    const study = await trx.selectFrom('study').selectAll().where('id', '=', id).executeTakeFirst()
    if (!study) throw new DomainError('not-found')
    if (study.state === 'entered-in-error') throw new DomainError('wrong-state', { details: { state: study.state } })
    const run = runId ? await trx.selectFrom('studyRun').select('id').where('id', '=', runId).where('studyId', '=', id).executeTakeFirst() : undefined
    if (runId && !run) throw new DomainError('not-valid', { fields: [{ path: 'runId', message: 'Choose a run of this study.' }] })
    const comment = { id: randomUUID(), studyId: id, runId, text, at: now(context), byUserId }
    await trx.insertInto('studyComment').values(comment).execute()
    await recordAuditEvent(context, trx, { name: 'study.comment-added', ...aboutStudy(study), data: { commentId: comment.id, runId } })
    return { id: comment.id, runId, text, at: comment.at, byName: context.actor.label }
  })
}
