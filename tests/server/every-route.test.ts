import { describe, expect, it } from 'vitest'
import type { EventHandler } from 'h3'
import { permissions } from '#shared/permissions'
import { apiHandlers } from '#server/utils/api-handler'
import { isPublicRoute } from '#server/utils/public-routes'
import { testContext } from './helpers'
import { cookieFor, routeFiles, serve } from './http'

/** Auth.js answers here; it has its own checks and is listed in public-routes.ts. */
const CATCH_ALL = '/api/auth/**'
const t = await testContext()
await t.makeSite()
const files = routeFiles()
const loaded = await Promise.all(files.map(async route => ({ ...route, handler: (await import(/* @vite-ignore */ route.file) as { default: EventHandler }).default })))
const routes = loaded.filter(route => route.path !== CATCH_ALL)
const { call } = serve(t, routes)
const sample = (path: string) => path.replaceAll(/:\w+/g, 'none')

it('there are routes to look at', () => expect(routes.length).toBeGreaterThan(20))

describe.each(routes)('$method $path', ({ method, path, handler }) => {
  const allow = apiHandlers.get(handler)?.allow
  const isPublic = isPublicRoute(method.toUpperCase(), sample(path))

  it('exports a handler made by defineApiHandler (write `export default defineApiHandler({ … })`)', () => expect(allow).toBeDefined())

  it('is public in both places or in neither (its `allow` and server/utils/public-routes.ts)', () => expect(allow === 'public').toBe(isPublic))

  it.skipIf(isPublic)('answers 401 to nobody', async () => {
    const answer = await call(method.toUpperCase(), sample(path), { body: method === 'get' ? undefined : {} })
    expect(answer.status).toBe(401)
    expect(answer.body).toMatchObject({ code: 'not-signed-in' })
    expect(answer.headers.get('cache-control')).toBe('no-store')
  })

  it.skipIf(isPublic || !allow || !(allow in permissions))('answers 403 to a role without the action', async () => {
    const allowed: readonly string[] = permissions[allow as keyof typeof permissions]
    const role = (['referring-physician', 'technologist', 'administrator'] as const).find(one => !allowed.includes(one))!
    const cookie = await cookieFor(t, await t.makeUser({ roles: [role] }))
    expect((await call(method.toUpperCase(), sample(path), { cookie, body: method === 'get' ? undefined : {} })).status).toBe(403)
  })

  it.skipIf(method === 'get' || method === 'head')('refuses a call from another origin', async () => {
    const answer = await call(method.toUpperCase(), sample(path), { body: {}, headers: { origin: 'https://elsewhere.example' } })
    expect(answer.status).toBe(403)
    expect(answer.body).toMatchObject({ code: 'other-origin' })
  })
})
