import { setCookie, type H3Event } from 'h3'
import { encodeSessionCookie, isSecure, SESSION_SECONDS, sessionCookieName } from './auth-cookie'
import { servicesOf } from './services'

/** Gives the browser the id of its renewed session. */
export async function renewCookie(event: H3Event, sessionId: string): Promise<void> {
  const { settings, keys } = servicesOf(event)
  const name = sessionCookieName(settings)
  setCookie(event, name, await encodeSessionCookie(sessionId, keys.authSecret, name), { httpOnly: true, sameSite: 'lax', path: '/', secure: isSecure(settings), maxAge: SESSION_SECONDS })
}
