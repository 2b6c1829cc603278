import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { cautionAnswers } from '#server/database/queries/bands'
import type { cautionsAskedSchema } from '#shared/schemas/bench'
import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { recordAuditEvent } from './record-audit-event'

/**
 * Nobody is stimulated with a wire that leads out of the body to the heart: current can reach the heart through it.
 * Source: AAEM guidelines, Risks in electrodiagnostic medicine, Muscle Nerve 1999;22(Suppl 8):S53-S58, from memory.
 * @throws DomainError 'not-valid' while the referral says that one is in place
 */
export function refusePacingWire(cautionsJson: string): void {
  const wire = cautionAnswers(cautionsJson).find(caution => caution.id === 'temporary-pacing-wire')
  if (wire?.answer === 'yes') throw new DomainError('not-valid', { message: 'A temporary pacing wire or other external cardiac lead is recorded. Nerves are not stimulated while it is in place: stop the study with this reason, or correct the answer if it is wrong.', fields: [{ path: 'cautions.temporary-pacing-wire', message: 'A temporary pacing wire is in place: stop the study.' }] })
}

async function open(trx: Trx, studyId: string) {
  const study = await trx.selectFrom('study').select(['id', 'siteId', 'patientId', 'referralId', 'state']).where('id', '=', studyId).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  if (!['planned', 'recording', 'returned'].includes(study.state)) throw new DomainError('wrong-state', { details: { state: study.state } })
  return study
}

/**
 * What the patient says at the bench stands in the referral from then on, with what stood there before in the trail: a
 * caution that was not asked at intake, or an answer that is no longer true on the day.
 * @example await askCautions(context, { id: studyId, answers: { lymphoedema: 'yes' } })
 */
export async function askCautions(context: ServiceContext, { id, answers }: z.infer<typeof cautionsAskedSchema> & { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const study = await open(trx, id)
    const referral = await trx.selectFrom('referral').select(['cautionsJson', 'revision']).where('id', '=', study.referralId).executeTakeFirstOrThrow()
    const known = cautionAnswers(referral.cautionsJson)
    const changed = known.filter(caution => answers[caution.id] !== undefined && answers[caution.id] !== caution.answer)
    if (changed.length === 0) return
    const cautionsJson = JSON.stringify({ ...Object.fromEntries(known.map(caution => [caution.id, caution.answer])), ...answers })
    await trx.updateTable('referral').set({ cautionsJson, revision: referral.revision + 1 }).where('id', '=', study.referralId).execute()
    const changes = changed.map(caution => ({ field: caution.id, before: caution.answer, after: answers[caution.id] }))
    await recordAuditEvent(context, trx, { name: 'study.cautions-asked', ...aboutStudy(study), data: { changes } })
  })
}
