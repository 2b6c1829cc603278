import type { ServiceContext } from './context'
import { verifyPassword } from './passwords'
import { countOwnAttempt, forgiveOwnAttempts } from './sign-in-limits'

/**
 * Asks a signed-in person for the password again: before signing, and before a change of password or second factor.
 * Slow on purpose; call it before the transaction, never inside.
 * @throws DomainError 'too-many-requests' after ten wrong ones in 15 minutes
 */
export async function verifyOwnPassword(context: ServiceContext, userId: string, password: string): Promise<boolean> {
  await countOwnAttempt(context.db, userId)
  const user = await context.db.selectFrom('user').select('passwordHash').where('id', '=', userId).where('deactivatedAt', 'is', null).executeTakeFirst()
  const right = await verifyPassword(user?.passwordHash, password)
  if (right) await forgiveOwnAttempts(context.db, userId)
  return right
}
