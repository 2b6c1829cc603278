import * as z from 'zod'
import { defineApiHandler } from '#server/utils/api-handler'

/**
 * The key under which this person's unsent cells lie on this device. Made from the key file for this person and this
 * device: nobody else is given it, it is the same after a crash and after signing in again, and the browser keeps it in
 * memory only.
 */
export default defineApiHandler({
  allow: 'study.record',
  query: z.object({ device: z.uuid() }),
  handle: ({ context, user, query }) => ({ key: context.keys.offlineKey(user.id, query.device).toString('base64') }),
})
