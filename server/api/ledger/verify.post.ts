import { verifyAudit } from '#server/services/verify-audit'
import { defineApiHandler } from '#server/utils/api-handler'

/** Recomputes both chains, the signed versions and the stored PDFs. A POST: that it was checked is itself an event. */
export default defineApiHandler({
  allow: 'audit.read',
  handle: ({ context }) => verifyAudit(context),
})
