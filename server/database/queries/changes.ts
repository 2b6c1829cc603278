import { compiled } from '#server/database/compiled'
import type { Database } from '#server/database/connection'
import { heardWith, type ChangeKind, type ChangeNotice } from '#shared/change-notice'

export interface StoredChange { seq: number, notice: ChangeNotice | null }

const isHeard = (subject: string): subject is ChangeKind => Object.hasOwn(heardWith, subject)

/**
 * What the audit trail holds after a number. The trail is written in the transaction of the act itself, so nothing is
 * announced that did not happen, and a reader who was away can go on from the number seen last.
 */
export async function changesAfter(db: Database, seq: number): Promise<StoredChange[]> {
  const rows = await selectAfter(db, [seq, MOST_CHANGES + 1])
  return rows.map(({ seq, subject, subjectId, name, siteId, actorId }) => ({ seq, notice: isHeard(subject) ? { kind: subject, id: subjectId, what: name, siteId, by: actorId } : null }))
}

/** More than this is not told one by one. */
export const MOST_CHANGES = 500

export async function latestChange(db: Database): Promise<number> {
  return (await selectLatest(db, [1]))[0]?.seq ?? 0
}

const selectAfter = compiled(db => db.selectFrom('auditEvent').select(['seq', 'subject', 'subjectId', 'name', 'siteId', 'actorId']).where('seq', '>', 0).orderBy('seq').limit(501).compile())
const selectLatest = compiled(db => db.selectFrom('auditEvent').select('seq').orderBy('seq', 'desc').limit(1).compile())
