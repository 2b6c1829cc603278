import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { removeTemperature } from '#server/services/save-temperature'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema, temperatureId: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params }) => {
    await removeTemperature(context, { id: params.id, temperatureId: params.temperatureId })
    return { removed: true }
  },
})
