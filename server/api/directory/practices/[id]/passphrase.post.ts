import * as z from 'zod'
import { renewPassphrase } from '#server/services/change-practice'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** The only answer that ever holds a passphrase. */
export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => renewPassphrase(context, params.id),
})
