import type { EventHandler } from 'h3'
import { sql } from 'kysely'
import { describe, expect, it } from 'vitest'
import { addEquipment } from '#server/services/equipment'
import { createTask } from '#server/services/create-task'
import { proposeAdoption } from '#server/services/adopt-set'
import { proposePolicy } from '#server/services/policies'
import { askReader } from '#server/services/ask-reader'
import { storeUpload } from '#server/services/store-upload'
import { apiHandlers } from '#server/utils/api-handler'
import { permissions, roles, type Action, type Role } from '#shared/permissions'
import { testContext } from './helpers'
import { cookieFor, routeFiles, serve } from './http'
import { readingRoom } from './reading-helpers'
import { sampleOf } from './sample-body'

/**
 * Every route, walked by every role: at a site where the person works nothing of another site can be reached. Bodies and
 * queries are made from the route's own schema, so that its checks are reached and not only its form. A route with a new
 * kind of id fails until `theirs` below has one of the other site.
 */
const t = await testContext()
const there = await readingRoom(t)
const own = await t.makeSite({ name: 'Own Clinic' })
const { reportId, studyId } = await there.signed()
const recording = await there.recording()
const stored = await there.study(recording)
const referralId = stored.record.referralId
const run = stored.study.runs[0]!
const delivery = await t.db.selectFrom('delivery').select('id').executeTakeFirstOrThrow()
const upload = await storeUpload(there.admin, { referralId, name: 'a.pdf', bytes: Buffer.from('%PDF-1.4\n%%EOF') })
const adoption = await proposeAdoption(there.neurologist, { siteId: there.site.id, setId: 'aanem-ndtf-2016', setVersion: 1, techniques: null, effectiveOn: '2026-12-02' })
const policy = await proposePolicy(there.neurologist, { name: 'temperature', siteId: there.site.id, body: { handMinimumC: 32, footMinimumC: 30, correctionShown: false }, note: 'a test', effectiveOn: '2026-12-10' })
const device = await addEquipment(there.admin, { siteId: there.site.id, name: 'Device', serial: '1', kind: 'amplifier', calibrationDue: null, safetyDue: null }) as { id: string }
const person = await t.makeUser({ name: 'Works Elsewhere', roles: [{ siteId: there.site.id, role: 'technologist' }] })
await t.db.transaction().execute(trx => createTask(there.admin, trx, { kind: 'grid', subject: 'study', subjectId: studyId, siteId: there.site.id, sentence: 'Theirs.' }))
const question = await askReader(there.technologist, { studyId: recording, runId: null, question: 'Is it enough?', readersHere: 0 })
const incident = { id: 'grid-incident' }
await t.db.insertInto('incident').values({ id: incident.id, deliveryId: delivery.id, siteId: there.site.id, reason: 'a test', awareAt: '2026-12-02T09:00:00.000Z', openedAt: '2026-12-02T09:00:00.000Z', openedBy: null, contactAt: null, contactMeans: null, decision: null, toldAt: null, closedAt: null, closedBy: null }).execute()
const reply = { id: 'grid-reply' }
await t.db.insertInto('deliveryReply').values({ id: reply.id, deliveryId: delivery.id, words: 'I think this is wrong.', at: '2026-12-02T09:00:00.000Z', answeredAt: null, answeredBy: null }).execute()
const task = await t.db.selectFrom('task').select('id').where('kind', '=', 'grid').executeTakeFirstOrThrow()

/** Ids of the other site, by the part of the address that they follow. */
const theirs: Record<string, string> = {
  'referrals': referralId, 'studies': recording, 'reports': reportId, 'deliveries': delivery.id, 'uploads': upload.id, 'adoptions': adoption.id, 'versions': policy.id, 'equipment': device.id, 'questions': question.id, 'incidents': incident.id, 'replies': reply.id,
  'people': person.id, 'tasks': task.id, 'sites': there.site.id, 'runs': run.id, 'rows': run.rows[0]!.id, 'temperatures': 'none', 'sessions': 'none', 'absences': 'none', 'closed-days': '2026-12-24', 'overview': 'waiting',
}
/** Fields that name something of the other site wherever they stand in a body or query. */
const known = { siteId: there.site.id, referralId, studyId: recording, reportId, technologistId: person.id, readerId: person.id, coveredBy: person.id, time: '14:30', copiedFrom: 'paper', birthDate: '1974-03-14' }
/** Where the schema alone does not tell what fits. */
const bodies: Record<string, object> = {
  'PUT /api/incidents/:id': { awareAt: '2026-12-02T09:00:00.000Z', viewed: 'unknown', revision: 1 },
  'POST /api/questions/:id/answer': { answer: 'It is.', addRun: null },
  'POST /api/bench/walk-in': { siteId: there.site.id, patientId: stored.record.patientId, clinicalQuestion: 'Median nerve?', side: 'right', protocol: 'carpal-tunnel', cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no' } },
  'POST /api/policies': { name: 'temperature', siteId: there.site.id, body: { handMinimumC: 32, footMinimumC: 30, correctionShown: false }, note: 'a test', effectiveOn: '2026-12-10' },
}
const secrets = [there.site.id, referralId, recording, studyId, reportId, delivery.id, upload.id, adoption.id, policy.id, device.id, person.id, task.id, question.id, incident.id, reply.id]

/** Addresses that belong to no site, each with why. */
const noSite: [RegExp, string][] = [
  [/^\/api\/reading\/emergency/, 'the one way into another site, with a logged reason and a term; it has tests of its own'],
  [/^\/api\/events/, 'a stream that stays open and is filtered for each hearer; changes.test.ts'],
  [/^\/api\/(?:merges|outside-studies)/, 'they belong to a patient, and so to the organisation'],
  [/^\/api\/letters/, 'opened by a mailed token and a birth date, not by a role; letters.test.ts'],
  [/^\/api\/list-views/, 'saved views are their person\'s alone'],
  [/^\/api\/patients/, 'patients belong to the organisation; what they hold of other sites is checked by other-sites.test.ts'],
  [/^\/api\/directory/, 'the directory belongs to the organisation; attack-directory.test.ts says who changes what'],
  [/^\/api\/retention/, 'records belong to the organisation'],
  [/^\/api\/shelf\/(?:sets|row-checks)/, 'sets belong to the organisation'],
  [/^\/api\/ledger\/(?:verify|access-report)/, 'the chains are one; what a patient is told covers every site'],
  [/^\/api\/policies\/:name/, 'a policy by its name; its site stands in the query'],
  [/^\/api\/desk\/drafts/, 'a draft is its writer\'s alone, and a referral may go to any open site; desk-refer.test.ts'],
  [/^\/api\/people\/role-proposals\/:id/, 'decided by who approves at the site; attack-two-people.test.ts'],
]
const routes = await Promise.all(routeFiles().filter(route => !route.path.includes('**')).map(async (route) => {
  const handler = (await import(/* @vite-ignore */ route.file) as { default: EventHandler }).default
  return { ...route, handler, definition: apiHandlers.get(handler)!, name: `${route.method.toUpperCase()} ${route.path}` }
}))
const { call } = serve(t, routes)
const cookies = Object.fromEntries(await Promise.all(roles.map(async role => [role, await cookieFor(t, await t.makeUser({ roles: [{ siteId: own.id, role }] }))]))) as Record<Role, string>
const events = async () => (await t.db.selectFrom('auditEvent').select(eb => eb.fn.countAll<number>().as('n')).where('name', '<>', 'access.refused').executeTakeFirstOrThrow()).n

/** The address with ids of the other site, and everything its schemas ask for. */
function requestOf({ path, method, name, definition }: (typeof routes)[number]) {
  const parts = path.split('/')
  const missing: string[] = []
  const address = parts.map((part, index) => {
    if (!part.startsWith(':')) return part
    const id = theirs[parts[index - 1]!]
    if (id === undefined) missing.push(parts[index - 1]!)
    return id ?? 'none'
  }).join('/')
  const query = definition.query ? sampleOf(definition.query, known) as Record<string, unknown> : {}
  const words = new URLSearchParams(Object.entries(query).map(([key, value]) => [key, String(value)])).toString()
  const body = method === 'get' ? undefined : bodies[name] ?? (definition.body ? sampleOf(definition.body, known) : {})
  return { address: words ? `${address}?${words}` : address, body, missing, named: path.includes(':') || JSON.stringify([query, body]).includes(there.site.id) }
}
const guarded = routes.filter(route => route.definition.allow in permissions)
const reasonOf = (path: string) => noSite.find(([pattern]) => pattern.test(path))?.[1]
const allowedRoles = (route: (typeof routes)[number]) => permissions[route.definition.allow as Action] as readonly Role[]

it('there are routes of both kinds to walk', () => {
  expect(guarded.filter(route => !reasonOf(route.path)).length).toBeGreaterThan(60)
})

describe.each(guarded.filter(route => !reasonOf(route.path)))('$name', (route) => {
  const { address, body, missing, named } = requestOf(route)
  it('has ids of the other site to be asked with (add one to `theirs`, or say in `noSite` why it belongs to none)', () => expect(missing).toEqual([]))

  it.each(roles)('%s of another site', async (role) => {
    const before = await events()
    const answer = await call(route.method.toUpperCase(), address, { cookie: cookies[role], body })
    const text = JSON.stringify(answer.body)
    if (!allowedRoles(route).includes(role)) expect([answer.status, text]).toEqual([403, expect.stringContaining('not-allowed')])
    else if (named) expect([answer.status, text]).toEqual([expect.toSatisfy((status: number) => status === 404 || status === 403 || allowsNothing(route.path, status, text)), expect.anything()])
    else expect(answer.status).toBeLessThan(500)
    for (const id of secrets) expect(text).not.toContain(id)
    // That a list was exported, be it empty, is an event.
    if (route.path !== '/api/ledger/export' && (named || route.method === 'get')) expect(await events()).toBe(before)
  })
})

/** Lists that take a site as a filter answer with an empty list. */
function allowsNothing(path: string, status: number, text: string): boolean {
  return status === 200 && !path.includes(':') && (text === '[]' || text.includes('"rows":[]'))
}

/** Counts of every table but the views, which are what reading leaves, and what a page makes of a frozen report once: its PDF. */
async function writtenByReading() {
  const tables = await sql<{ name: string }>`SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT IN ('view_event', 'meta', 'report_pdf', 'session') AND name NOT LIKE 'sqlite_%' AND sql NOT LIKE '%VIRTUAL%'`.execute(t.db)
  const counts: Record<string, number> = {}
  for (const { name } of tables.rows) counts[name] = (await sql<{ n: number }>`SELECT count(*) AS n FROM ${sql.table(name)}`.execute(t.db)).rows[0]!.n
  const made = await t.db.selectFrom('auditEvent').select(eb => eb.fn.countAll<number>().as('n')).where('name', '=', 'report.pdf-made').executeTakeFirstOrThrow()
  return { ...counts, audit_event: (counts.audit_event ?? 0) - made.n }
}

describe('at the other site itself', async () => {
  const cookie = await cookieFor(t, await t.makeUser({ roles: roles.filter(role => role !== 'referring-physician').map(role => ({ siteId: there.site.id, role })) }))
  it.each(guarded.filter(route => route.method === 'get' && route.path.includes(':') && !reasonOf(route.path) && !route.path.startsWith('/api/desk') && !route.path.startsWith('/api/overview')))('$name opens with the same id and writes nothing', async (route) => {
    const before = await writtenByReading()
    // 409: it is there, and not in the state for this.
    expect([200, 409]).toContain((await call('GET', requestOf(route).address, { cookie })).status)
    expect(await writtenByReading()).toEqual(before)
  })
})
