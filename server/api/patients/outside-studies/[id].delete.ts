import * as z from 'zod'
import { removeOutsideStudy } from '#server/services/outside-studies'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.write',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await removeOutsideStudy(context, params)
    return params
  },
})
