import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { addTemperature } from '#server/services/save-temperature'
import { idSchema } from '#shared/schemas/common'
import { addTemperatureSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: addTemperatureSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => addTemperature(context, { id: params.id, ...body }),
})
