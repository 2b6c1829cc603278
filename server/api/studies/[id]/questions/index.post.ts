import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { askReader } from '#server/services/ask-reader'
import { mayAt } from '#server/services/context'
import { defineApiHandler } from '#server/utils/api-handler'
import { hubOf } from '#server/utils/change-hub'
import { servicesOf } from '#server/utils/services'
import { idSchema } from '#shared/schemas/common'
import { askSchema } from '#shared/schemas/question'

export default defineApiHandler({
  allow: 'question.ask',
  params: z.object({ id: idSchema }),
  body: askSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ event, context, params, body, user }) => {
    const siteId = await siteOfStudy(context.db, params.id)
    const readersHere = hubOf(servicesOf(event)).present().filter(actor => actor.userId !== user.id && siteId !== null && mayAt(actor, 'question.answer', siteId)).length
    return askReader(context, { studyId: params.id, ...body, readersHere })
  },
})
