import { changesAfter, latestChange, MOST_CHANGES } from '#server/database/queries/changes'
import { heardWith, type ChangeNews, type ChangeNotice } from '#shared/change-notice'
import { mayAt, sitesWhere, type Actor, type ServiceContext } from './context'

/** May this person hear of it? Asked for each notice, with the roles in force now. What has no site belongs to all of them. */
export function mayHear(actor: Actor, { kind, siteId }: Pick<ChangeNotice, 'kind' | 'siteId'>): boolean {
  const action = heardWith[kind]
  return siteId ? mayAt(actor, action, siteId) : sitesWhere(actor, action).length > 0
}

/**
 * What happened after a number, as far as this person may hear it; without a number only where the trail stands now.
 * @example await hearChanges(context, 4711) // => { seq: 4713, again: false, changes: [{ kind: 'study', … }] }
 */
export async function hearChanges(context: Pick<ServiceContext, 'db' | 'actor'>, after: number | null): Promise<ChangeNews> {
  const latest = await latestChange(context.db)
  if (after === null || after >= latest) return { seq: latest, again: after !== null && after > latest, changes: [] }
  const found = await changesAfter(context.db, after)
  if (found.length > MOST_CHANGES) return { seq: latest, again: true, changes: [] }
  return { seq: found.at(-1)?.seq ?? latest, again: false, changes: found.flatMap(({ notice }) => notice && mayHear(context.actor, notice) ? [notice] : []) }
}
