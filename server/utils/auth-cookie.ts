import { createHash } from 'node:crypto'
import { decode, encode } from '@auth/core/jwt'
import type { Settings } from '#server/services/context'

/** Seconds from sign-in after which a session ends whatever happens. */
export const SESSION_SECONDS = 12 * 3600
const CACHE_SIZE = 1_000

/** With TLS the name has the `__Host-` prefix, which browsers bind to this host, this path and Secure. */
export function sessionCookieName(settings: Pick<Settings, 'appOrigin'>): string {
  return cookieName(settings, 'session')
}

/** Cookies know no ports: without TLS the port is part of the name, so that two copies on one machine do not sign each other out. */
export function cookieName(settings: Pick<Settings, 'appOrigin'>, purpose: string): string {
  const origin = new URL(settings.appOrigin)
  return origin.protocol === 'https:' ? `__Host-orthodrome-${purpose}` : `orthodrome-${purpose}-${origin.port || '80'}`
}

export function isSecure(settings: Pick<Settings, 'appOrigin'>): boolean {
  return settings.appOrigin.startsWith('https:')
}

/** The value of one cookie in a Cookie header; undefined when it is not there or no browser can have sent it so. */
export function cookieValue(header: string | undefined, name: string): string | undefined {
  for (const part of header?.split(';') ?? []) {
    const at = part.indexOf('=')
    if (part.slice(0, at).trim() === name) return decoded(part.slice(at + 1).trim())
  }
  return undefined
}

function decoded(text: string): string | undefined {
  try {
    return decodeURIComponent(text)
  }
  catch { return undefined }
}

/**
 * Decrypting the cookie costs far more than reading the session's row, so the decrypted id is kept, by the hash of the
 * cookie. Only this pure step is cached: whether the session still holds is asked of the database at every request.
 */
const decrypted = new Map<string, { sessionId: string, expiresAt: number }>()

export async function sessionIdOf(cookie: string, secret: string, salt: string, nowMs: number): Promise<string | null> {
  const key = createHash('sha256').update(salt).update('\0').update(secret).update('\0').update(cookie).digest('base64')
  const known = decrypted.get(key)
  if (known) {
    decrypted.delete(key)
    if (known.expiresAt <= nowMs) return null
    decrypted.set(key, known)
    return known.sessionId
  }
  const token = await decode({ token: cookie, secret, salt }).catch(() => null)
  if (typeof token?.sid !== 'string') return null
  if (decrypted.size >= CACHE_SIZE) decrypted.delete(decrypted.keys().next().value!)
  decrypted.set(key, { sessionId: token.sid, expiresAt: (token.exp ?? 0) * 1000 })
  return token.sid
}

/** A cookie value for a session id, as @auth/core makes it; for the new session after a change of password or factor. */
export async function encodeSessionCookie(sessionId: string, secret: string, salt: string): Promise<string> {
  return await encode({ token: { sid: sessionId }, secret, salt, maxAge: SESSION_SECONDS })
}
