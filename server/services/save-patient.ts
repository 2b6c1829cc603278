import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { patientView } from '#server/database/queries/patients'
import { DomainError } from '#shared/errors'
import type { PatientChange, PatientInput, PatientView } from '#shared/schemas/patient'
import { changedFields } from './changed-fields'
import { now, type ServiceContext } from './context'
import { nextNumber } from './next-number'
import { recordAuditEvent } from './record-audit-event'
import { tellAppointmentsAnew } from './tell-patient'
import { withdrawReady } from './withdraw-ready'

/** Nobody is born after today; a birth more than 125 years ago is a slip (the longest documented life was 122 years: common knowledge). */
function checkBirthDate(context: ServiceContext, birthDate: string | undefined): void {
  if (birthDate === undefined) return
  const today = context.clock().toISOString().slice(0, 10)
  const message = birthDate > today ? 'Date of birth must not be after today.' : Number(today.slice(0, 4)) - Number(birthDate.slice(0, 4)) > 125 ? 'Date of birth must be within the last 125 years.' : null
  if (message) throw new DomainError('not-valid', { fields: [{ path: 'birthDate', message }] })
}

/** A new person, inside a transaction that does more with it. */
export async function insertPatient(context: ServiceContext, trx: Trx, input: PatientInput): Promise<PatientView> {
  checkBirthDate(context, input.birthDate)
  const recordNumber = await nextNumber(trx, 'patient', context.clock().getUTCFullYear())
  const row = await trx.insertInto('patient').values({ id: randomUUID(), recordNumber, ...input, mergedInto: null, createdAt: now(context), createdBy: context.actor.userId }).returningAll().executeTakeFirstOrThrow()
  await recordAuditEvent(context, trx, { name: 'patient.added', subject: 'patient', subjectId: row.id, patientId: row.id, data: { recordNumber } })
  return patientView(row)
}

/** Enters a new person into the register. Namesakes are shown before, by another route; they do not stop this one. */
export async function addPatient(context: ServiceContext, input: PatientInput): Promise<PatientView> {
  return context.db.transaction().execute(trx => insertPatient(context, trx, input))
}

/**
 * Changes a person's entry, if nobody else did since the form was filled.
 * @throws DomainError 'changed-meanwhile' with `details.theirs`, the entry as it stands now
 */
export async function changePatient(context: ServiceContext, { id, revision, ...change }: PatientChange & { id: string }): Promise<PatientView> {
  checkBirthDate(context, change.birthDate)
  return context.db.transaction().execute(async (trx) => {
    const before = await trx.selectFrom('patient').selectAll().where('id', '=', id).executeTakeFirst()
    if (!before) throw new DomainError('not-found')
    if (before.revision !== revision) throw new DomainError('changed-meanwhile', { details: { theirs: patientView(before) } })
    const changes = changedFields(before, change)
    if (changes.length === 0) return patientView(before)
    const row = await trx.updateTable('patient').set({ ...change, revision: revision + 1 }).where('id', '=', id).returningAll().executeTakeFirstOrThrow()
    await recordAuditEvent(context, trx, { name: 'patient.changed', subject: 'patient', subjectId: id, patientId: id, data: { changes } })
    if ('email' in change || 'mailConsent' in change) await tellAppointmentsAnew(context, trx, id)
    if ('birthDate' in change || 'sexForLimits' in change) await withdrawReady(context, trx, { patientId: id })
    return patientView(row)
  })
}
