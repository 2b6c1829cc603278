import * as z from 'zod'
import { askForLink } from '#server/services/answer-link'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

/** The same answer for every link: it tells nobody whether there is a report. */
export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(1).max(200) }),
  handle: ({ event, context, params }) => askForLink(context, { token: params.token, address: clientAddress(event) }),
})
