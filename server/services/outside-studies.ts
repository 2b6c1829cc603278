import { randomUUID } from 'node:crypto'
import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { anyQuantity } from '#shared/catalogue/computed-quantities'
import { techniqueOf } from '#shared/catalogue/nerves'
import { DomainError, type FieldError } from '#shared/errors'
import type { outsideStudySchema, OutsideValue } from '#shared/schemas/patient-history'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

type Input = z.output<typeof outsideStudySchema>

function valueErrors(values: readonly OutsideValue[]): FieldError[] {
  return values.flatMap(({ technique, quantity, value }, index) => {
    const [nerve, known] = [techniqueOf(technique), anyQuantity(quantity)]
    if (!nerve) return [{ path: `values[${index}].technique`, message: 'Choose a nerve of the list.' }]
    if (!known) return [{ path: `values[${index}].quantity`, message: 'Choose a quantity of the list.' }]
    const range = known.possible
    return range && (value < range.min || value > range.max) ? [{ path: `values[${index}].value`, message: `${known.label} must be between ${range.min} and ${range.max} ${known.unit}. Is it another unit?` }] : []
  })
}

async function checkUpload(trx: Trx, patientId: string, uploadId: string | null): Promise<void> {
  if (uploadId === null) return
  const upload = await trx.selectFrom('upload').innerJoin('referral', 'referral.id', 'upload.referralId').select('upload.id').where('upload.id', '=', uploadId).where('referral.patientId', '=', patientId).where('removedAt', 'is', null).executeTakeFirst()
  if (!upload) throw new DomainError('not-valid', { fields: [{ path: 'uploadId', message: 'Choose a file of this patient.' }] })
}

/** Enters what another laboratory reported. It is shown beside the patient's own studies and judged by nothing: its technique is not known here. */
export async function addOutsideStudy(context: ServiceContext, { patientId, ...input }: Input & { patientId: string }): Promise<{ id: string }> {
  const enteredBy = context.actor.userId
  if (!enteredBy) throw new DomainError('not-signed-in')
  const errors = valueErrors(input.values)
  if (input.performedOn > now(context).slice(0, 10)) errors.push({ path: 'performedOn', message: 'The day must not lie after today.' })
  if (errors.length) throw new DomainError('not-valid', { fields: errors })
  return await context.db.transaction().execute(async (trx) => {
    const patient = await trx.selectFrom('patient').select('id').where('id', '=', patientId).executeTakeFirst()
    if (!patient) throw new DomainError('not-found')
    await checkUpload(trx, patientId, input.uploadId)
    const id = randomUUID()
    const { performedOn, place, summary, values, uploadId } = input
    await trx.insertInto('outsideStudy').values({ id, patientId, performedOn, place, summary, valuesJson: JSON.stringify(values), uploadId, enteredAt: now(context), enteredBy, removedAt: null }).execute()
    await recordAuditEvent(context, trx, { name: 'patient.outside-study-added', subject: 'patient', subjectId: patientId, patientId, data: { performedOn, values: values.length } })
    return { id }
  })
}

/** Takes an entry away that should not be there. */
export async function removeOutsideStudy(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const row = await trx.updateTable('outsideStudy').set({ removedAt: now(context) }).where('id', '=', id).where('removedAt', 'is', null).returning(['patientId', 'performedOn']).executeTakeFirst()
    if (!row) throw new DomainError('not-found')
    await recordAuditEvent(context, trx, { name: 'patient.outside-study-removed', subject: 'patient', subjectId: row.patientId, patientId: row.patientId, data: { performedOn: row.performedOn } })
  })
}
