import { defineEventHandler, getQuery, getRouterParams, readBody, setResponseHeader, setResponseStatus, type EventHandler, type H3Event } from 'h3'
import type * as z from 'zod'
import type { Database } from '#server/database/connection'
import { mayAt, sitesWhere, type ServiceContext } from '#server/services/context'
import { emergencyAccessFor } from '#server/services/open-in-emergency'
import { recordRefusal } from '#server/services/record-refusal'
import { DomainError, errors, type ApiErrorBody, type FieldError } from '#shared/errors'
import type { Action } from '#shared/permissions'
import type { SessionUser } from '#shared/schemas/user'
import { answerOf } from './answer-of'
import { isPublicRoute } from './public-routes'
import { serverContext, servicesOf } from './services'

type Output<S> = S extends z.ZodType ? z.output<S> : undefined
export type Allow = Action | 'signed-in' | 'public'

interface Asked<P, Q, B> { params: Output<P>, query: Output<Q>, body: Output<B> }

export interface ApiDefinition<A extends Allow, P, Q, B, R> {
  /** The action needed; 'signed-in' for the own account; 'public' also needs a line in public-routes.ts. */
  allow: A
  params?: P
  query?: Q
  body?: B
  /** The site that the thing asked for belongs to; null when there is no such thing. */
  siteOf?: (db: Database, asked: Asked<P, Q, B>) => Promise<string | null>
  /** True for the few routes that a signer without a second factor needs in order to set one up. */
  duringEnrolment?: boolean
  /** Its result is the answer: JSON, or bytes and streams with headers set on `event`. Errors are always JSON. */
  handle: (asked: Asked<P, Q, B> & {
    event: H3Event
    context: ServiceContext
    user: A extends 'public' ? SessionUser | null : SessionUser
    /** Ids of the sites where the person may do `allow`; empty for 'signed-in' and 'public'. Pass them to the query. */
    sites: string[]
  }) => R
}

/** What tests know of the handlers made here: every-route.test.ts and permission-grid.test.ts walk them all. */
export const apiHandlers = new WeakMap<EventHandler, { allow: Allow, query?: z.ZodType, body?: z.ZodType }>()

/**
 * Every route of the API: who, what, do, return. Checks the session, the second factor, the permission, the address,
 * the query and the body; turns every error into one shape (`ApiErrorBody`); sends no patient data to caches.
 *
 * Without `siteOf` the person needs the action at one site at least, and `sites` says where. With it the action is
 * needed at that site: no role there answers 404, as if the thing did not exist; a role without the action answers 403.
 *
 * @example
 * export default defineApiHandler({
 *   allow: 'study.read', params: z.object({ id: idSchema }),
 *   siteOf: (db, { params }) => siteOfStudy(db, params.id),
 *   handle: ({ context, params }) => loadStudyView(context.db, params.id),
 * })
 */
export function defineApiHandler<A extends Allow, R, P extends z.ZodType | undefined = undefined, Q extends z.ZodType | undefined = undefined, B extends z.ZodType | undefined = undefined>(definition: ApiDefinition<A, P, Q, B, R>): EventHandler<object, Promise<Awaited<R> | ApiErrorBody>> {
  const handler = defineEventHandler(async (event): Promise<Awaited<R> | ApiErrorBody> => {
    setResponseHeader(event, 'Cache-Control', 'no-store')
    try {
      return await runApi(event, definition)
    }
    catch (error) {
      return answerError(event, error)
    }
  })
  apiHandlers.set(handler, { allow: definition.allow, query: definition.query as z.ZodType | undefined, body: definition.body as z.ZodType | undefined })
  return handler as EventHandler<object, Promise<Awaited<R> | ApiErrorBody>>
}

/** The wrapper itself, free of the server around it, so that tests can run it on a bare event. */
export async function runApi<A extends Allow, P, Q, B, R>(event: H3Event, definition: ApiDefinition<A, P, Q, B, R>): Promise<Awaited<R>> {
  const user = checkSession(event, definition)
  const signedIn = serverContext(event)
  const sites = isAction(definition.allow) ? await checkAction(event, signedIn, definition.allow) : []
  const params = parse(definition.params, getRouterParams(event, { decode: true }), 'not-found') as Output<P>
  const query = parse(definition.query, getQuery(event)) as Output<Q>
  const body = (definition.body ? parse(definition.body, await readJson(event)) : undefined) as Output<B>
  const asked = { params, query, body }
  const context = definition.siteOf && isAction(definition.allow) ? await checkSite(event, signedIn, definition.allow, await definition.siteOf(signedIn.db, asked)) : signedIn
  return await definition.handle({ ...asked, event, context, user: user as never, sites })
}

function isAction(allow: Allow): allow is Action {
  return allow !== 'signed-in' && allow !== 'public'
}

function checkSession(event: H3Event, definition: { allow: Allow, duringEnrolment?: boolean }): SessionUser | null {
  const user = event.context.session?.user ?? null
  if (definition.allow === 'public') {
    if (!isPublicRoute(event.method, event.path.split('?')[0]!)) throw new Error('A route allows everybody and is not listed in public-routes.ts.')
    return user
  }
  if (!user) throw new DomainError('not-signed-in')
  if (user.mustEnrol && !definition.duringEnrolment) throw new DomainError('second-factor-needed')
  return user
}

async function checkAction(event: H3Event, context: ServiceContext, action: Action): Promise<string[]> {
  const sites = sitesWhere(context.actor, action)
  if (sites.length === 0) await refuse(event, context, action, null, 'not-allowed')
  return sites
}

/** @returns the context to act in: with the stated reason where the record was opened in an emergency */
async function checkSite(event: H3Event, context: ServiceContext, action: Action, siteId: string | null): Promise<ServiceContext> {
  if (siteId === null) throw new DomainError('not-found')
  if (mayAt(context.actor, action, siteId)) return context
  const opened = await emergencyAccessFor(context, action, siteId, Object.values(getRouterParams(event, { decode: true })))
  if (opened) return opened
  const worksThere = context.actor.holdings.some(holding => holding.siteId === siteId)
  return await refuse(event, context, action, siteId, worksThere ? 'not-allowed' : 'not-found')
}

async function refuse(event: H3Event, context: ServiceContext, action: Action, siteId: string | null, code: 'not-allowed' | 'not-found'): Promise<never> {
  await recordRefusal(context, { action, siteId, route: `${event.method} ${event.path.split('?')[0]!}`, because: code === 'not-found' ? 'no role at the site' : 'the role does not allow it' })
  throw new DomainError(code)
}

async function readJson(event: H3Event): Promise<unknown> {
  try {
    return await readBody(event) ?? {}
  }
  catch {
    throw new DomainError('not-valid', { log: 'the body is not JSON' })
  }
}

function parse(schema: unknown, value: unknown, code: 'not-valid' | 'not-found' = 'not-valid'): unknown {
  if (!schema) return undefined
  const parsed = (schema as z.ZodType).safeParse(value)
  if (parsed.success) return parsed.data
  throw new DomainError(code, code === 'not-valid' ? { fields: fieldErrors(parsed.error.issues) } : {})
}

/** @example fieldErrors([{ path: ['runs', 0, 'side'], message: '…' }]) // => [{ path: 'runs[0].side', message: '…' }] */
export function fieldErrors(issues: readonly { path: PropertyKey[], message: string }[]): FieldError[] {
  return issues.map(issue => ({
    path: issue.path.reduce<string>((path, part) => typeof part === 'number' ? `${path}[${part}]` : path ? `${path}.${String(part)}` : String(part), ''),
    message: issue.message,
  }))
}

/** The address as a log may hold it: no query, and every long part masked, since one-time links carry their token there. */
export function routeForLog(event: H3Event): string {
  return event.path.split('?')[0]!.replace(/[^/]{20,}/g, ':id')
}

/** Sets the status and gives the body: the same shape for every error, without stack, SQL or message of a library. */
export function answerError(event: H3Event, error: unknown): ApiErrorBody {
  const known = answerOf(error)
  setResponseStatus(event, errors[known.code].status)
  const seconds = known.code === 'too-many-requests' ? (known.options.details as { seconds?: number } | undefined)?.seconds : undefined
  if (seconds) setResponseHeader(event, 'Retry-After', seconds)
  if (known.code === 'unexpected') servicesOf(event).log.error({ err: error, method: event.method, route: routeForLog(event) }, 'A request failed unexpectedly')
  return known.body
}
