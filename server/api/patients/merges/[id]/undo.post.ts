import * as z from 'zod'
import { undoMerge } from '#server/services/merge-patients'
import { idSchema } from '#shared/schemas/common'
import { undoMergeSchema } from '#shared/schemas/patient-history'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.merge',
  params: z.object({ id: idSchema }),
  body: undoMergeSchema,
  handle: async ({ context, params, body }) => {
    await undoMerge(context, { mergeId: params.id, ...body })
    return params
  },
})
