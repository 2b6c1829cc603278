import { searchPatients } from '#server/database/queries/patients'
import { patientSearchSchema } from '#shared/schemas/patient'
import { defineApiHandler } from '#server/utils/api-handler'

/** The register of the organisation. */
export default defineApiHandler({
  allow: 'patient.search',
  query: patientSearchSchema,
  handle: ({ context, query }) => searchPatients(context.db, query),
})
