import * as z from 'zod'
import { listCollectors } from '#server/services/collect-report'
import { collectorsSchema } from '#shared/schemas/delivery'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

/** Who may collect for the practice, once its passphrase was given. */
export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(20).max(100) }),
  body: collectorsSchema,
  handle: ({ event, context, params, body }) => listCollectors(context, { token: params.token, address: clientAddress(event), passphrase: body.passphrase }),
})
