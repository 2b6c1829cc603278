import type { Role } from '#shared/permissions'
import type { TaskRow } from '#shared/schemas/delivery'
import type { Database } from '../connection'

export interface TaskReader { userId: string, holdings: readonly { siteId: string, role: Role }[] }

const pathOf: Record<string, (id: string) => string> = {
  'delivery': () => '/dispatch',
  'incident': id => `/dispatch/incidents/${id}`,
  'report': id => `/reports/${id}`,
  'referral': id => `/intake/${id}`,
  'study': id => `/reading/${id}`,
  'emergency-access': id => `/ledger?subjectId=${id}`,
  'person': id => `/people/${id}`,
  'practice': id => `/directory/${id}`,
  'role-proposal': () => '/people',
  'question': id => `/questions/${id}`,
}

/** Open tasks for this person: own ones, and those of a role held at the task's site, or anywhere where the task has none; what is due first comes first. */
export async function openTasks(db: Database, { userId, holdings }: TaskReader): Promise<TaskRow[]> {
  const rows = await db.selectFrom('task').leftJoin('site', 'site.id', 'task.siteId').leftJoin('user', 'user.id', 'task.ownerId')
    // A reply is answered on the page of its version.
    .leftJoin('deliveryReply', join => join.onRef('deliveryReply.id', '=', 'task.subjectId').on('task.subject', '=', 'reply')).leftJoin('delivery', 'delivery.id', 'deliveryReply.deliveryId').leftJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId')
    .select(['task.id', 'kind', 'subject', 'subjectId', 'sentence', 'task.createdAt', 'dueAt', 'site.name as siteName', 'user.name as ownerName', 'reportVersion.reportId as repliedReport', 'reportVersion.version as repliedVersion'])
    .where('doneAt', 'is', null)
    .where(eb => eb.or([eb('ownerId', '=', userId), ...holdings.map(({ siteId, role }) => eb.and([eb('ownerId', 'is', null), eb.or([eb('task.siteId', 'is', null), eb('task.siteId', '=', siteId)]), eb.or([eb('ownerRole', 'is', null), eb('ownerRole', '=', role)])]))]))
    .orderBy(eb => eb.fn.coalesce('dueAt', 'task.createdAt')).orderBy('task.id').limit(500).execute()
  return rows.map(({ subject, subjectId, repliedReport, repliedVersion, ...row }) => ({ ...row, link: repliedReport ? `/reports/${repliedReport}?version=${repliedVersion}#replies` : pathOf[subject]?.(subjectId) ?? null }))
}
