import { latestChange } from '#server/database/queries/changes'
import { countOpenTasks } from '#server/database/queries/tasks-of'
import { defineApiHandler } from '#server/utils/api-handler'

/** Who is signed in; null for nobody. Holdings are read anew at each request. */
export default defineApiHandler({
  allow: 'public',
  handle: async ({ context, user }) => user && { ...user, openTasks: await countOpenTasks(context.db, user.id, user.holdings), changesUpTo: await latestChange(context.db) },
})
