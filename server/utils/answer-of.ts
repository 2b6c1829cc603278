import { DomainError } from '#shared/errors'

/**
 * Turns whatever was thrown into an error that may be shown. A full disk has a code of its own, so that the person
 * learns that nothing was stored; everything unknown becomes 'unexpected'.
 */
export function answerOf(error: unknown): DomainError {
  if (error instanceof DomainError) return error
  const code = (error as { code?: unknown } | null)?.code
  if (code === 'SQLITE_FULL' || code === 'ENOSPC') return new DomainError('no-space')
  if ((error as { statusCode?: unknown } | null)?.statusCode === 413) return new DomainError('too-large')
  return new DomainError('unexpected')
}
