import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { DomainError, type FieldError } from '#shared/errors'
import type { ReferralSide } from '#shared/schemas/common'
import type { Confirmation, confirmSchema } from '#shared/schemas/bench'
import { refusePacingWire } from './ask-cautions'
import { now, type ServiceContext } from './context'
import { aboutStudy, studyChanged } from './editable-study'
import { layOutRuns } from './lay-out-runs'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'

type Input = z.infer<typeof confirmSchema>

function checkConfirmation(input: Input, referral: { side: ReferralSide | null, cautionsJson: string }): void {
  const fields: FieldError[] = []
  if (new Set(input.identifiers).size < 2) fields.push({ path: 'identifiers', message: 'Confirm two different identifiers.' })
  if (input.side !== referral.side && input.sideReason.length < 3) fields.push({ path: 'sideReason', message: `The referral says ${(referral.side ?? 'no side').toUpperCase()}. Say why the side differs.` })
  if (fields.length) throw new DomainError('not-valid', { fields })
  refusePacingWire(referral.cautionsJson)
}

async function loadFor(trx: Trx, studyId: string) {
  const study = await trx.selectFrom('study').selectAll().where('id', '=', studyId).executeTakeFirst()
  if (!study) throw new DomainError('not-found')
  if (!['planned', 'recording', 'returned'].includes(study.state)) throw new DomainError('wrong-state', { details: { state: study.state } })
  const referral = await trx.selectFrom('referral').select(['side', 'cautionsJson']).where('id', '=', study.referralId).executeTakeFirstOrThrow()
  return { study, referral }
}

/**
 * Confirms who lies there, which side, and that the cautions were read; recording opens with it. A side that differs
 * from the referral needs a reason, and the planned runs follow the confirmed side.
 */
export async function confirmStudy(context: ServiceContext, { id, ...input }: Input & { id: string }): Promise<Confirmation> {
  return context.db.transaction().execute(async (trx) => {
    const { study, referral } = await loadFor(trx, id)
    checkConfirmation(input, referral)
    const confirmation: Confirmation = { ...input, at: now(context), byName: context.actor.label }
    await trx.updateTable('study').set({ confirmationJson: JSON.stringify(confirmation) }).where('id', '=', id).execute()
    if (study.state === 'planned') await moveState(context, trx, { subject: 'study', id, from: 'planned', to: 'recording' })
    await layOutRuns(context, trx, study, input.side)
    await studyChanged(context, trx, study)
    const { identifiers, side, sideReason } = input
    await recordAuditEvent(context, trx, { name: 'study.confirmed', ...aboutStudy(study), data: { identifiers, side, referralSide: referral.side, sideReason } })
    return confirmation
  })
}
