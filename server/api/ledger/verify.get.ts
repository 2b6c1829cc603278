import { verifyAudit } from '#server/services/verify-audit'
import { defineApiHandler } from '#server/utils/api-handler'

/** Recomputes both chains from the first link. */
export default defineApiHandler({
  allow: 'audit.read',
  handle: ({ context }) => verifyAudit(context),
})
