import { readdirSync } from 'node:fs'
import { join, resolve } from 'node:path'
import { createApp, createRouter, defineEventHandler, toWebHandler, type EventHandler, type RouterMethod } from 'h3'
import * as h3 from 'h3'
import * as apiHandler from '#server/utils/api-handler'
import { encodeSessionCookie, sessionCookieName } from '#server/utils/auth-cookie'
import { guardRequest } from '#server/utils/guard-request'
import * as services from '#server/utils/services'
import { createSession } from '#server/services/sessions'
import type { MadeUser, TestContext } from './helpers'

// Nitro imports these by itself; here nobody does.
Object.assign(globalThis, h3, apiHandler, services)

export interface RouteFile { file: string, method: RouterMethod, path: string }

/** Every file under server/api with the method and address that Nitro gives it. */
export function routeFiles(): RouteFile[] {
  const root = resolve('server/api')
  return readdirSync(root, { recursive: true, encoding: 'utf8' }).filter(file => file.endsWith('.ts')).sort().map((file) => {
    const [, stem, method] = /^(.*?)(?:\.(get|post|put|patch|delete))?\.ts$/.exec(file)!
    const path = `/api/${stem!}`.replace(/\/index$/, '').replaceAll(/\[\.\.\.\w*\]/g, '**').replaceAll(/\[(\w+)\]/g, ':$1')
    return { file: join(root, file), method: (method ?? 'get') as RouterMethod, path }
  })
}

/**
 * The guard and some routes on bare h3, as the running server has them, without the server around it.
 * @example const { call } = serve(t, [{ method: 'get', path: '/api/thing', handler }])
 */
export function serve(t: TestContext, routes: { method: RouterMethod, path: string, handler: EventHandler }[]) {
  const app = createApp()
  app.use(defineEventHandler((event) => {
    event.context.services = t.context
    return guardRequest(event)
  }))
  const router = createRouter()
  for (const { method, path, handler } of routes) router.use(path, handler, method)
  app.use(router)
  const handle = toWebHandler(app)

  async function call(method: string, path: string, options: { cookie?: string, body?: unknown, headers?: Record<string, string> } = {}) {
    const headers: Record<string, string> = { origin: t.settings.appOrigin, ...options.headers }
    if (options.cookie) headers.cookie = options.cookie
    const raw = options.body instanceof URLSearchParams ? options.body.toString() : options.body === undefined ? undefined : JSON.stringify(options.body)
    if (raw !== undefined) headers['content-type'] ??= options.body instanceof URLSearchParams ? 'application/x-www-form-urlencoded' : 'application/json'
    const response = await handle(new Request(`${t.settings.appOrigin}${path}`, { method, headers, body: raw }))
    const text = await response.text()
    let body: unknown = text
    try {
      body = JSON.parse(text)
    }
    catch { /* text or bytes */ }
    return { status: response.status, headers: response.headers, body: body as Record<string, unknown>, cookies: cookiesOf(response.headers) }
  }
  return { call }
}

/** Set-Cookie headers as one Cookie header for the next call. */
function cookiesOf(headers: Headers): string {
  return headers.getSetCookie().map(cookie => cookie.split(';')[0]!).join('; ')
}

/** A session of this person, as the cookie a browser would send. */
export async function cookieFor(t: TestContext, user: MadeUser): Promise<string> {
  const sessionId = await t.db.transaction().execute(trx => createSession(t.context, trx, { userId: user.id, secondFactor: true, agent: 'test' }))
  const name = sessionCookieName(t.settings)
  return `${name}=${await encodeSessionCookie(sessionId, t.keys.authSecret, name)}`
}
