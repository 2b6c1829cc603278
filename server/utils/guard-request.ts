import { getHeader, setResponseHeader, type H3Event } from 'h3'
import { DomainError, type ApiErrorBody } from '#shared/errors'
import { answerError, routeForLog } from './api-handler'
import { isPublicRoute } from './public-routes'
import { requestSession } from './request-session'
import { servicesOf } from './services'

const SAFE = ['GET', 'HEAD', 'OPTIONS']

/**
 * Stands before every route: /api is closed unless public-routes.ts says otherwise, and a call that changes something
 * must come from our own pages. Pages carry patient data too, so nothing but the built files may be cached.
 * @returns the answer that ends the request, or undefined to go on
 */
export async function guardRequest(event: H3Event): Promise<ApiErrorBody | undefined> {
  const path = event.path.split('?')[0]!
  if (!path.startsWith('/_nuxt/')) setResponseHeader(event, 'Cache-Control', 'no-store')
  if (!path.startsWith('/api/') && path !== '/api') return undefined
  try {
    if (!SAFE.includes(event.method) && !isOwnOrigin(event)) throw new DomainError('other-origin')
    if (isTooLarge(event)) throw new DomainError('too-large', { message: 'The request is larger than the server takes. Nothing was stored.' })
    event.context.session = await requestSession(event)
    if (!event.context.session && !isPublicRoute(event.method, path)) throw new DomainError('not-signed-in')
    if (isAnotherPerson(event)) throw new DomainError('not-signed-in', { message: 'Somebody else has signed in in this browser. Sign in again; what you typed is kept.' })
    return undefined
  }
  catch (error) {
    if (error instanceof DomainError) servicesOf(event).log.info({ refused: error.code, method: event.method, route: routeForLog(event) }, 'A request was refused')
    return answerError(event, error)
  }
}

/** A page says whose it is: after another person signed in in the same browser it stores nothing in their name. */
function isAnotherPerson(event: H3Event): boolean {
  const person = getHeader(event, 'x-person')
  return person !== undefined && event.context.session != null && event.context.session.user.id !== person
}

const JSON_BYTES = 2_000_000
/** A file of 10 MB with the wrapping around it. */
const UPLOAD_BYTES = 10_500_000

/** By the stated length; a body of unstated length is refused, since nothing would stop it growing. */
function isTooLarge(event: H3Event): boolean {
  if (getHeader(event, 'transfer-encoding') !== undefined) return true
  const limit = getHeader(event, 'content-type')?.startsWith('multipart/form-data') ? UPLOAD_BYTES : JSON_BYTES
  return Number(getHeader(event, 'content-length') ?? 0) > limit
}

/**
 * Browsers send Origin with every POST, PUT, PATCH and DELETE, and Sec-Fetch-Site beside it; a page elsewhere can
 * change neither. A caller that sends neither is no browser and has no cookie of ours.
 */
export function isOwnOrigin(event: H3Event): boolean {
  const origin = getHeader(event, 'origin')
  if (origin !== undefined) return origin === new URL(servicesOf(event).settings.appOrigin).origin
  const site = getHeader(event, 'sec-fetch-site')
  return site === undefined || site === 'same-origin' || site === 'none'
}
