import { describe, expect, it } from 'vitest'
import * as z from 'zod'
import { defineApiHandler } from '#server/utils/api-handler'
import { permissions, roles, type Action } from '#shared/permissions'
import { testContext } from './helpers'
import { cookieFor, serve } from './http'

/** Walks every cell of shared/permissions.ts through the real guard and wrapper: role by action, at the own site and at another. */
const t = await testContext()
const own = await t.makeSite()
const other = await t.makeSite()
const actions = Object.keys(permissions) as Action[]
const { call } = serve(t, actions.flatMap(action => [
  { method: 'get' as const, path: `/api/any/${action}`, handler: defineApiHandler({ allow: action, handle: ({ sites }) => ({ sites }) }) },
  { method: 'get' as const, path: `/api/at/${action}/:siteId`, handler: defineApiHandler({ allow: action, params: z.object({ siteId: z.string() }), siteOf: async (_db, { params }) => params.siteId === 'none' ? null : params.siteId, handle: () => ({ done: true }) }) },
]))

describe.each(roles)('%s', async (role) => {
  const user = await t.makeUser({ roles: [{ siteId: own.id, role }] })
  const cookie = await cookieFor(t, user)

  it.each(actions)('%s', async (action) => {
    const allowed = (permissions[action] as readonly string[]).includes(role)
    const anywhere = await call('GET', `/api/any/${action}`, { cookie })
    expect(anywhere.status).toBe(allowed ? 200 : 403)
    if (allowed) expect(anywhere.body.sites).toEqual([own.id])
    expect((await call('GET', `/api/at/${action}/${own.id}`, { cookie })).status).toBe(allowed ? 200 : 403)
    expect((await call('GET', `/api/at/${action}/${other.id}`, { cookie })).status).toBe(allowed ? 404 : 403)
    expect((await call('GET', `/api/at/${action}/none`, { cookie })).status).toBe(allowed ? 404 : 403)
  })
})

it('a role at another site without the action answers 403, for that site only', async () => {
  const user = await t.makeUser({ roles: [{ siteId: own.id, role: 'neurologist' }, { siteId: other.id, role: 'technologist' }] })
  const cookie = await cookieFor(t, user)
  expect((await call('GET', `/api/at/report.sign/${own.id}`, { cookie })).status).toBe(200)
  const refused = await call('GET', `/api/at/report.sign/${other.id}`, { cookie })
  expect(refused.status).toBe(403)
  expect(refused.body.code).toBe('not-allowed')
})

it('nobody signed in gets 401 whatever the action', async () => {
  for (const action of actions) expect((await call('GET', `/api/any/${action}`)).status).toBe(401)
})

it('every refused access is in the audit trail, with action and reason', async () => {
  const user = await t.makeUser({ roles: [{ siteId: own.id, role: 'technologist' }] })
  await call('GET', `/api/at/report.read/${other.id}`, { cookie: await cookieFor(t, user) })
  await call('GET', '/api/any/report.sign?words=secret', { cookie: await cookieFor(t, user) })
  const events = await t.db.selectFrom('auditEvent').selectAll().where('name', '=', 'access.refused').where('actorId', '=', user.id).orderBy('seq').execute()
  expect(events.map(event => JSON.parse(event.dataJson))).toEqual([{ action: 'report.read', because: 'no role at the site' }, { action: 'report.sign', because: 'the role does not allow it' }])
  expect(events[1]!.subjectId).toBe('GET /api/any/report.sign')
})
