import type { H3Event } from 'h3'
import { countLinkAttempt } from '#server/services/sign-in-limits'
import { clientAddress } from './auth'
import { servicesOf } from './services'

/** For routes that take a one-time token from anybody: 30 calls in 15 minutes from one address. */
export async function limitByAddress(event: H3Event): Promise<void> {
  await countLinkAttempt(servicesOf(event).db, clientAddress(event))
}
