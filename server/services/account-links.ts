import type { Trx } from '#server/database/connection'
import { now, type ServiceContext } from './context'
import { newToken } from './keys'

/** One-time links with which a password is set, and the askings of which two make one. */
export const LINK = 'set-password'
export const ASKED = 'set-password-asked'
/** A shown link is handed over at once; a mailed one may lie over a week-end. */
export const linkHours = { shown: 24, mailed: 72, reset: 2 } as const

export interface LinkData {
  resetSecondFactor: boolean
  askedBy: string | null
  /** Who made the link, alone or as the second. */
  madeBy?: string | null
  /** The address that a mailed link went to: using it proves the mailbox. */
  mailedTo?: string
}

/** The token itself is known to the answer or the mail only; its hash is kept. */
export async function insertLink(context: ServiceContext, trx: Trx, link: { purpose: string, personId: string, data: LinkData, hours: number }): Promise<{ token: string, expiresAt: string }> {
  const token = newToken()
  const expiresAt = new Date(context.clock().getTime() + link.hours * 3_600_000).toISOString()
  await trx.insertInto('oneTimeLink').values({ tokenHash: context.keys.tokenHash(token), purpose: link.purpose, userId: link.personId, dataJson: JSON.stringify(link.data), createdAt: now(context), expiresAt, usedAt: null }).execute()
  return { token, expiresAt }
}

/** Unused links and askings of a person are worth nothing from now on. */
export async function endLinks(trx: Trx, personId: string): Promise<void> {
  await trx.deleteFrom('oneTimeLink').where('purpose', 'in', [LINK, ASKED, 'confirm-address']).where('userId', '=', personId).where('usedAt', 'is', null).execute()
}
