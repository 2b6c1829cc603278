import { openTasks } from '#server/database/queries/tasks'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'task.read',
  handle: ({ context, user }) => openTasks(context.db, { userId: user.id, holdings: context.actor.holdings }),
})
