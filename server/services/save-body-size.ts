import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { aboutStudy, editableStudy, studyChanged } from './editable-study'
import { recordAuditEvent } from './record-audit-event'

interface BodySize { heightCm: number | null, weightKg: number | null }

/** Height in cm and weight in kg, each to one decimal; null where not measured. */
export async function saveBodySize(context: ServiceContext, { id, heightCm, weightKg }: BodySize & { id: string }): Promise<BodySize> {
  const fields = Object.entries({ heightCm, weightKg }).filter(([, value]) => value !== null && Math.abs(value * 10 - Math.round(value * 10)) > 1e-6).map(([path]) => ({ path, message: 'Enter at most one decimal.' }))
  if (fields.length) throw new DomainError('not-valid', { fields })
  return context.db.transaction().execute(async (trx) => {
    const study = await editableStudy(trx, id)
    const before = { heightCm: study.heightCm, weightKg: study.weightKg }
    if (before.heightCm === heightCm && before.weightKg === weightKg) return before
    await trx.updateTable('study').set({ heightCm, weightKg }).where('id', '=', id).execute()
    await studyChanged(context, trx, study)
    await recordAuditEvent(context, trx, { name: 'study.body-size-changed', ...aboutStudy(study), data: { before, after: { heightCm, weightKg } } })
    return { heightCm, weightKg }
  })
}
