import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible'
import type { Database } from '#server/database/connection'
import { DomainError } from '#shared/errors'

/**
 * How guessing is slowed, and why nobody can lock a colleague out by it.
 *
 * A browser in which a person has signed in before carries a device mark (a cookie that only this server can make, for
 * that one account). Its failures are counted for that device alone: 10 in 15 minutes, 90 in 24 hours. Every other attempt is counted
 * twice: by address (40 in 15 minutes) and by account (20 in 15 minutes, 90 in 24 hours; NIST SP 800-63B allows at most
 * 100 failures in a row, from memory). So whoever hammers at a colleague's account, from outside or from the next desk, closes it
 * for unknown browsers for a while; the colleague's own workstation goes on.
 *
 * Counted in memory, by this one process: a restart forgets. A success gives its own point back and forgets the account's
 * failures, never those of the address.
 */
const QUARTER = 15 * 60
const limits = {
  device: { points: 10, duration: QUARTER },
  deviceDay: { points: 90, duration: 24 * 3600 },
  address: { points: 40, duration: QUARTER },
  account: { points: 20, duration: QUARTER },
  accountDay: { points: 90, duration: 24 * 3600 },
  /** Passwords asked again inside a session: signing, change of password or factor. */
  own: { points: 10, duration: QUARTER },
  /** Codes of the present second factor, asked when it is replaced: counted apart, since a right password forgives its own count. */
  ownCode: { points: 10, duration: QUARTER },
  /** Calls with a one-time token. The token itself has 256 bits; this keeps the hashing of passwords from being driven by strangers. */
  link: { points: 30, duration: QUARTER },
  /** Mails with a link to set a new password, by account: nobody's mailbox is filled, and nobody learns that it was refused. */
  reset: { points: 3, duration: 3600 },
} as const
type LimitName = keyof typeof limits
type Limiters = Record<LimitName, RateLimiterMemory>

const perDatabase = new WeakMap<Database, Limiters>()

function limitersOf(db: Database): Limiters {
  let found = perDatabase.get(db)
  if (!found) {
    found = Object.fromEntries(Object.entries(limits).map(([name, options]) => [name, new RateLimiterMemory({ keyPrefix: name, ...options })])) as Limiters
    perDatabase.set(db, found)
  }
  return found
}

export interface Attempt { address: string, account: string, device: string | null }

function keysOf(attempt: Attempt): [LimitName, string][] {
  if (attempt.device) return [['device', attempt.device], ['deviceDay', attempt.device]]
  return [['address', attempt.address], ['account', attempt.account], ['accountDay', attempt.account]]
}

/**
 * Counts an attempt before the password is looked at, so that many at once cannot slip through.
 * @throws DomainError 'too-many-requests' with `details.seconds` to wait, and `details.first` at the first refusal of a row
 */
export async function countAttempt(db: Database, attempt: Attempt): Promise<void> {
  for (const [name, key] of keysOf(attempt)) await consume(db, name, key)
}

export async function forgiveAttempt(db: Database, attempt: Attempt): Promise<void> {
  const limiters = limitersOf(db)
  for (const [name, key] of keysOf(attempt)) {
    if (name === 'address') await limiters.address.reward(key)
    else await limiters[name].delete(key)
  }
}

/** @throws DomainError 'too-many-requests' */
export async function countOwnAttempt(db: Database, userId: string): Promise<void> {
  await consume(db, 'own', userId)
}

export async function forgiveOwnAttempts(db: Database, userId: string): Promise<void> {
  await limitersOf(db).own.delete(userId)
}

/** @throws DomainError 'too-many-requests' */
export async function countOwnCode(db: Database, userId: string): Promise<void> {
  await consume(db, 'ownCode', userId)
}

export async function forgiveOwnCodes(db: Database, userId: string): Promise<void> {
  await limitersOf(db).ownCode.delete(userId)
}

/** @throws DomainError 'too-many-requests' */
export async function countLinkAttempt(db: Database, address: string): Promise<void> {
  await consume(db, 'link', address)
}

/** Counts a wish for a new password by mail; false when there were too many, which the caller keeps to itself. */
export async function countReset(db: Database, account: string): Promise<boolean> {
  try {
    await limitersOf(db).reset.consume(account)
    return true
  }
  catch (refused) {
    if (refused instanceof RateLimiterRes) return false
    throw refused
  }
}

async function consume(db: Database, name: LimitName, key: string): Promise<void> {
  try {
    await limitersOf(db)[name].consume(key)
  }
  catch (refused) {
    if (!(refused instanceof RateLimiterRes)) throw refused
    throw new DomainError('too-many-requests', { details: { seconds: Math.ceil(refused.msBeforeNext / 1000), first: refused.consumedPoints === limits[name].points + 1 } })
  }
}
