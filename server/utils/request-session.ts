import { getHeader, type H3Event } from 'h3'
import { readSession, type OpenSession } from '#server/services/read-session'
import { cookieValue, sessionCookieName, sessionIdOf } from './auth-cookie'
import { servicesOf, systemContext } from './services'

/** Polling sends this header: it must not keep an unattended workstation signed in. */
export const BACKGROUND_HEADER = 'x-background'

/** An event stream cannot send a header: its address is known, and nobody can forget it. */
export function isBackground(event: H3Event): boolean {
  return getHeader(event, BACKGROUND_HEADER) === '1' || /^\/api\/events(?:[/?]|$)/.test(event.path)
}

/** The session behind a request's cookie, or null. Only the cookie counts: no Authorization header is looked at. */
export async function requestSession(event: H3Event): Promise<OpenSession | null> {
  const services = servicesOf(event)
  const sessionId = await requestSessionId(event)
  if (!sessionId) return null
  return await readSession(systemContext(services), sessionId, isBackground(event))
}

export async function requestSessionId(event: H3Event): Promise<string | null> {
  const { settings, keys } = servicesOf(event)
  const name = sessionCookieName(settings)
  const cookie = cookieValue(getHeader(event, 'cookie'), name)
  return cookie ? await sessionIdOf(cookie, keys.authSecret, name, Date.now()) : null
}
