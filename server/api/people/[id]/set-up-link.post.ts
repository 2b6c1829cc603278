import * as z from 'zod'
import { viewPerson } from '#server/services/people'
import { makeSetUpLink } from '#server/services/set-up-link'
import { idSchema } from '#shared/schemas/common'
import { setUpLinkSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

/** `people.read` opens the door for the medical director, who is often the second of two; the service asks for more where it is needed. */
export default defineApiHandler({
  allow: 'people.read',
  params: z.object({ id: idSchema }),
  body: setUpLinkSchema,
  handle: async ({ context, sites, params, body }) => {
    await viewPerson(context, sites, params.id)
    return await makeSetUpLink(context, params.id, body)
  },
})
