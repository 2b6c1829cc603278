import { makeAccessReport } from '#server/services/view-ledger'
import { accessReportSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

/** For the patient: who saw and did what with the record. */
export default defineApiHandler({
  allow: 'audit.read',
  body: accessReportSchema,
  handle: ({ context, body }) => makeAccessReport(context, body),
})
