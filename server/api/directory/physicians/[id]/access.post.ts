import * as z from 'zod'
import { giveDeskAccess } from '#server/services/desk-access'
import { idSchema } from '#shared/schemas/common'
import { deskAccessSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: deskAccessSchema,
  handle: ({ context, params, body }) => giveDeskAccess(context, { physicianId: params.id, ...body }),
})
