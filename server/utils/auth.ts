import { Auth, type AuthConfig } from '@auth/core'
import { CredentialsSignin } from '@auth/core/errors'
import Credentials from '@auth/core/providers/credentials'
import { getHeader, getRequestHeaders, getRequestIP, readRawBody, type H3Event } from 'h3'
import { signIn, type SignedIn } from '#server/services/sign-in'
import { signOut } from '#server/services/sessions'
import { DomainError } from '#shared/errors'
import { signInSchema } from '#shared/schemas/user'
import { cookieName, cookieValue, isSecure, SESSION_SECONDS } from './auth-cookie'
import { requestSessionId } from './request-session'
import { servicesOf, systemContext } from './services'

declare module '@auth/core/jwt' {
  interface JWT { sid?: string }
}
declare module '@auth/core/types' {
  interface User { sid?: string }
}

/** What `authorize` learnt beside the answer that Auth.js makes of it. */
export interface SignInOutcome { signedIn?: SignedIn, waitSeconds?: number }

class Refused extends CredentialsSignin {
  constructor(override code: string) { super(code) }
}

/**
 * Auth.js as a guard of its own three addresses: csrf, callback/credentials, signout. The token that it encrypts holds a
 * random session id and nothing else; who that is, and whether it still holds, is read from the database at each request.
 */
export function authConfig(event: H3Event, outcome: SignInOutcome): AuthConfig {
  const { settings, keys, log } = servicesOf(event)
  const secure = isSecure(settings)
  const cookie = (purpose: string) => ({ name: cookieName(settings, purpose), options: { httpOnly: true, sameSite: 'lax' as const, path: '/', secure } })
  return {
    basePath: '/api/auth',
    secret: keys.authSecret,
    // Safe, since authRequest makes the address from our own origin and never from the Host header.
    trustHost: true,
    useSecureCookies: secure,
    cookies: { sessionToken: cookie('session'), csrfToken: cookie('csrf'), callbackUrl: cookie('callback') },
    session: { strategy: 'jwt', maxAge: SESSION_SECONDS },
    pages: { signIn: '/sign-in', error: '/sign-in' },
    providers: [Credentials({ credentials: { email: {}, password: {}, code: {} }, authorize: input => authorize(event, input, outcome) })],
    callbacks: {
      jwt: ({ token, user }) => ({ sid: user?.sid ?? token.sid }),
      redirect: ({ url, baseUrl }) => url.startsWith('/') && !url.startsWith('//') ? baseUrl + url : baseUrl,
    },
    events: {
      signOut: async (message) => {
        if ('token' in message && message.token?.sid) await signOut(systemContext(servicesOf(event)), message.token.sid)
      },
    },
    // A refused sign-in is no fault of the program; the audit trail has it.
    logger: { error: error => error instanceof CredentialsSignin ? undefined : log.error({ kind: error.name }, 'Auth.js reported an error'), warn: () => undefined, debug: () => undefined },
  }
}

async function authorize(event: H3Event, input: unknown, outcome: SignInOutcome) {
  const parsed = signInSchema.safeParse(input)
  if (!parsed.success) throw new Refused('sign-in-failed')
  const services = servicesOf(event)
  const cookies = getHeader(event, 'cookie')
  try {
    const signedIn = await signIn(systemContext(services), {
      ...parsed.data, address: clientAddress(event), agent: getHeader(event, 'user-agent') ?? '',
      deviceMark: name => cookieValue(cookies, cookieName(services.settings, name)),
      previousSessionId: await requestSessionId(event),
    })
    outcome.signedIn = signedIn
    return { id: signedIn.userId, sid: signedIn.sessionId }
  }
  catch (error) {
    if (!(error instanceof DomainError)) throw error
    if (error.code === 'too-many-requests') outcome.waitSeconds = (error.options.details as { seconds: number }).seconds
    throw new Refused(error.code)
  }
}

/** The socket's address; behind one proxy of ours the address that this proxy saw, which is the last entry it wrote. */
export function clientAddress(event: H3Event): string {
  const forwarded = servicesOf(event).settings.trustProxy ? getHeader(event, 'x-forwarded-for')?.split(',').at(-1)?.trim() : undefined
  return forwarded || getRequestIP(event) || 'unknown'
}

/** The request as Auth.js reads it, under our own origin. Any Authorization header stays behind: only the cookie counts. */
export async function authRequest(event: H3Event): Promise<Request> {
  const headers = new Headers()
  for (const [name, value] of Object.entries(getRequestHeaders(event))) if (value !== undefined) headers.set(name, value)
  headers.delete('authorization')
  const body = ['GET', 'HEAD'].includes(event.method) ? undefined : await readRawBody(event)
  return new Request(new URL(event.path, servicesOf(event).settings.appOrigin), { method: event.method, headers, body })
}

/** Answers one of Auth.js's addresses; marks the browser after a sign-in, says how long to wait after too many. */
export async function handleAuth(event: H3Event): Promise<Response> {
  const outcome: SignInOutcome = {}
  const answer = await Auth(await authRequest(event), authConfig(event, outcome)) as Response
  const response = new Response(answer.body, { status: answer.status, headers: answer.headers })
  response.headers.set('Cache-Control', 'no-store')
  if (outcome.waitSeconds) response.headers.set('Retry-After', String(outcome.waitSeconds))
  if (outcome.signedIn) response.headers.append('Set-Cookie', deviceCookie(event, outcome.signedIn.device))
  return response
}

const DEVICE_SECONDS = 90 * 86_400

function deviceCookie(event: H3Event, device: SignedIn['device']): string {
  const { settings } = servicesOf(event)
  return `${cookieName(settings, device.name)}=${device.mark}; Max-Age=${DEVICE_SECONDS}; Path=/; HttpOnly; SameSite=Lax${isSecure(settings) ? '; Secure' : ''}`
}
