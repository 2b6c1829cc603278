import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { defineApiHandler } from '#server/utils/api-handler'
import { hubOf, presenceOf } from '#server/utils/change-hub'
import { servicesOf } from '#server/utils/services'
import { idSchema } from '#shared/schemas/common'
import { presenceSchema } from '#shared/schemas/presence'

/** Says where this page stands in a study, and learns who else is there. */
export default defineApiHandler({
  allow: 'study.read',
  params: z.object({ id: idSchema }),
  body: presenceSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ event, context, params: { id }, body: { leaving, ...place }, user }) => {
    const presence = presenceOf(event)
    const changed = leaving ? presence.leave(id, place.tab, user.id) : presence.arrive(id, { ...place, userId: user.id, name: user.name })
    if (changed) void hubOf(servicesOf(event)).whisper({ kind: 'study', id, what: 'presence', siteId: await siteOfStudy(context.db, id), by: user.id })
    return presence.others(id, user.id)
  },
})
