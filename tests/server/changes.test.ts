import { createServer, type Server } from 'node:http'
import type { AddressInfo } from 'node:net'
import { createApp, createRouter, defineEventHandler, toNodeListener } from 'h3'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import newsRoute from '../../server/api/events/news.get'
import streamRoute from '../../server/api/events/index.get'
import presenceRoute from '../../server/api/studies/[id]/presence.put'
import keyRoute from '../../server/api/offline/key.get'
import { changePerson, deactivatePerson } from '#server/services/change-person'
import { makeChangeHub, type Listener } from '#server/services/change-hub'
import { makePresence } from '#server/services/presence'
import { recordAuditEvent } from '#server/services/record-audit-event'
import { createSession, signOut } from '#server/services/sessions'
import { guardRequest } from '#server/utils/guard-request'
import { hubOf } from '#server/utils/change-hub'
import { clinic } from './bench-helpers'
import { TEST_NOW, testContext, type MadeUser } from './helpers'
import { cookieFor, serve } from './http'

const t = await testContext()
const c = await clinic(t)
const elsewhere = await t.makeSite()
const admin = await t.makeUser({ roles: ['administrator'] })
const reader = await t.makeUser({ roles: ['neurologist'] })
const { call } = serve(t, [
  { method: 'get', path: '/api/events/news', handler: newsRoute },
  { method: 'put', path: '/api/studies/:id/presence', handler: presenceRoute },
  { method: 'get', path: '/api/offline/key', handler: keyRoute },
])

/** One change of each kind at a site, as a service would write it. */
const happen = (siteId: string, subject = 'study', id = 'thing') => t.db.transaction().execute(trx => recordAuditEvent(t.context, trx, { name: 'study.started', subject, subjectId: id, siteId, data: { number: 'S-1' } }))

async function listening(user: MadeUser, hub: ReturnType<typeof makeChangeHub>, after: number | null = null) {
  const sessionId = await t.db.transaction().execute(trx => createSession(t.context, trx, { userId: user.id, secondFactor: true, agent: 'test' }))
  const heard: string[] = []
  const seen: { seq: number } = { seq: 0 }
  const note = (seq?: number) => void (seen.seq = seq ?? seen.seq)
  const hear = (words: string, seq?: number) => {
    heard.push(words)
    note(seq)
  }
  const listener: Listener = {
    sessionId,
    tell: (notice, seq) => hear(`${notice.kind} ${notice.id}`, seq),
    tellAgain: seq => hear('again', seq),
    tellHere: note,
    end: () => hear('end'),
    hangUp: () => hear('hung up'),
  }
  await hub.listen(listener, after)
  return { heard, seen, sessionId, listener }
}

beforeEach(() => t.clock.set(TEST_NOW))

describe('who hears of a change', () => {
  it.each([
    { role: 'technologist', subject: 'study', hears: true },
    { role: 'technologist', subject: 'delivery', hears: false },
    { role: 'neurologist', subject: 'study', hears: true },
    { role: 'neurologist', subject: 'delivery', hears: true },
    { role: 'administrator', subject: 'study', hears: false },
    { role: 'administrator', subject: 'referral', hears: true },
    { role: 'referring-physician', subject: 'study', hears: false },
    { role: 'referring-physician', subject: 'report', hears: false },
    { role: 'medical-director', subject: 'user', hears: false },
  ] as const)('$role, $subject: $hears', async ({ role, subject, hears }) => {
    const hub = makeChangeHub(t.context)
    const { heard } = await listening(await t.makeUser({ roles: [{ siteId: c.site.id, role }] }), hub)
    await happen(c.site.id, subject)
    await hub.look()
    expect(heard).toEqual(hears ? [`${subject} thing`] : [])
    hub.close()
  })
  it('a server that stops breaks the line and says nothing of the session', async () => {
    const hub = makeChangeHub(t.context)
    const { heard } = await listening(await t.makeUser({ roles: [{ siteId: c.site.id, role: 'technologist' }] }), hub)
    hub.close()
    expect(heard).toEqual(['hung up'])
  })
  it('nobody hears of another site', async () => {
    const hub = makeChangeHub(t.context)
    const { heard } = await listening(await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] }), hub)
    await happen(elsewhere.id)
    await hub.look()
    expect(heard).toEqual([])
    hub.close()
  })
  it('what was rolled back is never told', async () => {
    const hub = makeChangeHub(t.context)
    const { heard } = await listening(await t.makeUser({ roles: ['neurologist'] }), hub)
    await t.db.transaction().execute(async (trx) => {
      await recordAuditEvent(t.context, trx, { name: 'study.stopped', subject: 'study', subjectId: 'never', siteId: c.site.id, data: {} })
      throw new Error('no')
    }).catch(() => undefined)
    await hub.look()
    expect(heard).toEqual([])
    hub.close()
  })
})

describe('the session behind a listener', () => {
  it('a deactivated person hears nothing further', async () => {
    const hub = makeChangeHub(t.context)
    const user = await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] })
    const { heard } = await listening(user, hub)
    await deactivatePerson(t.as(admin), user.id)
    await happen(c.site.id)
    await hub.look()
    await happen(c.site.id)
    await hub.look()
    expect(heard).toEqual(['end'])
    expect(hub.present()).toEqual([])
    hub.close()
  })
  it('signing out ends the stream at once', async () => {
    const hub = makeChangeHub(t.context)
    const { heard, sessionId } = await listening(await t.makeUser({ roles: ['neurologist'] }), hub)
    await signOut(t.context, sessionId)
    await hub.look()
    expect(heard).toEqual(['end'])
    hub.close()
  })
  it('a role that was taken away counts at the next change', async () => {
    const hub = makeChangeHub(t.context)
    const user = await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] })
    const { heard } = await listening(user, hub)
    await changePerson(t.as(admin), user.id, { holdings: [{ siteId: elsewhere.id, role: 'neurologist' }] })
    await happen(c.site.id)
    await happen(elsewhere.id, 'study', 'there')
    await hub.look()
    expect(heard).toEqual(['study there'])
    hub.close()
  })
  it('listening is no use: the session sits idle and ends', async () => {
    const hub = makeChangeHub(t.context)
    const { heard } = await listening(await t.makeUser({ roles: ['neurologist'] }), hub)
    for (let minute = 1; minute <= 20; minute++) {
      t.clock.minutes(1)
      await hub.look()
      expect(heard).toEqual(minute < 20 ? [] : ['end'])
    }
    hub.close()
  })
})

describe('after a broken line', () => {
  it('everything since the last number is told, once', async () => {
    const hub = makeChangeHub(t.context)
    const user = await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] })
    const first = await listening(user, hub)
    await happen(c.site.id, 'study', 'one')
    await hub.look()
    hub.leave(first.listener)
    await happen(c.site.id, 'study', 'two')
    await happen(elsewhere.id, 'study', 'not mine')
    await happen(c.site.id, 'study', 'three')
    const second = await listening(user, hub, first.seen.seq)
    await hub.look()
    expect(second.heard).toEqual(['study two', 'study three'])
    hub.close()
  })
  it('after very much, one is told to fetch everything again', async () => {
    const hub = makeChangeHub(t.context)
    const user = await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] })
    await t.db.transaction().execute(async (trx) => {
      for (let count = 0; count < 501; count++) await recordAuditEvent(t.context, trx, { name: 'study.stopped', subject: 'study', subjectId: 'many', siteId: c.site.id, data: {} })
    })
    const { heard } = await listening(user, hub, 1)
    expect(heard).toEqual(['again'])
    hub.close()
  })
  it('a number the trail has not reached (a restored backup) also fetches everything again', async () => {
    const hub = makeChangeHub(t.context)
    const { heard } = await listening(await t.makeUser({ roles: ['neurologist'] }), hub, 10_000_000)
    expect(heard).toEqual(['again'])
    hub.close()
  })
})

describe('asked for instead of streamed', () => {
  it('gives the same, and is no use', async () => {
    const user = await t.makeUser({ roles: [{ siteId: c.site.id, role: 'technologist' }] })
    const cookie = await cookieFor(t, user)
    const { seq } = (await call('GET', '/api/events/news', { cookie })).body as unknown as { seq: number }
    await happen(c.site.id, 'study', 'polled')
    await happen(elsewhere.id, 'study', 'hidden')
    expect((await call('GET', `/api/events/news?after=${seq}`, { cookie })).body).toMatchObject({ again: false, changes: [{ kind: 'study', id: 'polled', siteId: c.site.id }] })
    for (let minute = 1; minute < 20; minute++) {
      t.clock.minutes(1)
      expect((await call('GET', '/api/events/news', { cookie })).status).toBe(200)
    }
    t.clock.minutes(1)
    expect((await call('GET', '/api/events/news', { cookie })).status).toBe(401)
  })
})

describe('the stream over HTTP', () => {
  let server: Server
  let origin = ''
  beforeAll(async () => {
    const app = createApp()
    app.use(defineEventHandler((event) => {
      event.context.services = t.context
      return guardRequest(event)
    }))
    const router = createRouter()
    router.get('/api/events', streamRoute)
    app.use(router)
    server = createServer(toNodeListener(app)).listen(0, '127.0.0.1')
    await new Promise(done => server.once('listening', done))
    origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`
  })
  afterAll(() => {
    hubOf(t.context).close()
    server.closeAllConnections()
    server.close()
  })

  it('carries ids and kinds only, ends at deactivation, and is closed to nobody signed in', async () => {
    expect((await fetch(`${origin}/api/events`)).status).toBe(401)
    const user = await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] })
    const response = await fetch(`${origin}/api/events`, { headers: { cookie: await cookieFor(t, user) } })
    expect(response.headers.get('content-type')).toBe('text/event-stream')
    const reader = response.body!.pipeThrough(new TextDecoderStream()).getReader()
    let text = ''
    const until = async (part: string) => {
      while (!text.includes(part)) {
        const { value, done } = await reader.read()
        if (done) throw new Error(`ended before ${part}: ${text}`)
        text += value
      }
    }
    await until('event: here')
    await happen(c.site.id, 'study', 'streamed')
    await until('event: change')
    const data = JSON.parse(/event: change\ndata: (.*)\n/.exec(text.replaceAll(/id: \d+\n/g, ''))![1]!) as object
    expect(data).toEqual({ kind: 'study', id: 'streamed', what: 'study.started', siteId: c.site.id, by: null })
    expect(text).toMatch(/id: \d+\n/)
    await deactivatePerson(t.as(admin), user.id)
    await until('event: end')
    expect((await reader.read()).done).toBe(true)
  })
})

describe('presence', () => {
  it('others see who is there and where; one\'s own tabs are left out; whoever is silent goes', async () => {
    const presence = makePresence(t.context.clock)
    const person = { tab: 'a', userId: 'u1', name: 'Mirela', runId: 'r1', rowId: null, field: null }
    expect(presence.arrive('s', person)).toBe(true)
    expect(presence.arrive('s', person)).toBe(false)
    expect(presence.arrive('s', { ...person, runId: 'r2' })).toBe(true)
    presence.arrive('s', { ...person, tab: 'b' })
    expect(presence.others('s', 'u1')).toEqual([])
    expect(presence.others('s', 'u2').map(other => [other.tab, other.runId])).toEqual([['a', 'r2'], ['b', 'r1']])
    expect(presence.leave('s', 'a', 'u2')).toBe(false)
    t.clock.minutes(1)
    expect(presence.others('s', 'u2')).toEqual([])
  })
  it('asks for the right to see the study', async () => {
    const id = await c.recording()
    const stranger = await t.makeUser({ roles: [{ siteId: elsewhere.id, role: 'technologist' }] })
    const place = { tab: 't', runId: null }
    expect((await call('PUT', `/api/studies/${id}/presence`, { cookie: await cookieFor(t, stranger), body: place })).status).toBe(404)
    expect((await call('PUT', `/api/studies/${id}/presence`, { cookie: await cookieFor(t, c.technologistUser), body: place })).body).toEqual([])
    const second = await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] })
    expect((await call('PUT', `/api/studies/${id}/presence`, { cookie: await cookieFor(t, second), body: { tab: 'x' } })).body).toMatchObject([{ name: c.technologistUser.name }])
  })
})

describe('the key of what is not sent yet', () => {
  const device = '6f1c3a52-9d1e-4b44-8f3e-3f6a4b1c2d11'
  const keyFor = async (user: MadeUser, id = device) => {
    const answer = await call('GET', `/api/offline/key?device=${id}`, { cookie: await cookieFor(t, user) })
    return answer.body.key as string
  }
  it('is the same after signing in again, and another one for another person and another device', async () => {
    const [mine, again, other, elsewhereKey] = [await keyFor(c.technologistUser), await keyFor(c.technologistUser), await keyFor(reader), await keyFor(c.technologistUser, device.replace('6', '7'))]
    expect(Buffer.from(mine, 'base64')).toHaveLength(32)
    expect(again).toBe(mine)
    expect(new Set([mine, other, elsewhereKey]).size).toBe(3)
  })
  it('is given to nobody signed out, and to no device without a proper id', async () => {
    expect((await call('GET', `/api/offline/key?device=${device}`)).status).toBe(401)
    expect((await call('GET', '/api/offline/key?device=..%2F..', { cookie: await cookieFor(t, reader) })).status).toBe(422)
    expect((await call('GET', `/api/offline/key?device=${device}`, { cookie: await cookieFor(t, admin) })).status).toBe(403)
  })
})
