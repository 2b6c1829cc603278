import type { SendOutcome } from '#server/email/transport'
import { acknowledgeDelivery } from '#server/services/acknowledge-delivery'
import { actingAs, systemActor } from '#server/services/context'
import { claimDue, releaseHeld } from '#server/services/outbox-claims'
import { settleAttempt } from '#server/services/outbox-outcomes'
import type { Maker } from './make-study'

/** Most mails arrive; a few show what Dispatch looks like when they do not. */
function outcomeFor({ random }: Maker): SendOutcome {
  const draw = random.next()
  if (draw < 0.01) return { kind: 'uncertain', because: 'the connection broke after the last byte' }
  if (draw < 0.02) return { kind: 'permanent', because: 'the server refused the address (550)' }
  return { kind: 'accepted' }
}

/**
 * Moves what waits in the outbox as the sender does, without a mail on the wire: nobody was there a year ago to receive
 * it. The PDF of such a version is made when somebody first opens it.
 */
export async function deliverAsInThePast(maker: Maker): Promise<void> {
  const { clock, random } = maker
  const context = actingAs(maker.context, systemActor)
  clock.forward(2)
  await releaseHeld(context, 50)
  for (const mail of await claimDue(context, 'demonstration', 50)) {
    // Notices about accounts arrive and are not acknowledged.
    const outcome = mail.deliveryId ? outcomeFor(maker) : { kind: 'accepted' as const }
    await settleAttempt(context, mail, outcome)
    if (!mail.deliveryId || outcome.kind !== 'accepted' || random.chance(0.12)) continue
    const { acknowledgeToken } = JSON.parse(context.keys.unseal(mail.dataSealed)) as { acknowledgeToken: string }
    clock.forward(random.whole(20, 2800))
    await acknowledgeDelivery(context, { token: acknowledgeToken, address: 'demonstration' })
  }
}
