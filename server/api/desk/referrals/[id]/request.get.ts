import * as z from 'zod'
import { viewRequest } from '#server/services/desk-requests'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** Own or not is decided by the referring physician of the referral: everything else is not found. */
export default defineApiHandler({
  allow: 'desk.refer',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => viewRequest(context, params.id),
})
