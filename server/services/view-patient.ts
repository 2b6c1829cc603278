import { patientById } from '#server/database/queries/patients'
import { DomainError } from '#shared/errors'
import type { PatientView } from '#shared/schemas/patient'
import type { ServiceContext } from './context'
import { recordView } from './record-view'

/**
 * A person's entry in the register, which is the organisation's. Opening it is noted.
 * @throws DomainError 'not-found'
 */
export async function viewPatient(context: ServiceContext, id: string): Promise<PatientView> {
  const patient = await patientById(context.db, id)
  if (!patient) throw new DomainError('not-found')
  recordView(context, { subject: 'patient', subjectId: id, patientId: id })
  return patient
}
