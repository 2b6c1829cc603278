import type { EventHandler } from 'h3'
import { describe, expect, it } from 'vitest'
import { proposeAdoption } from '#server/services/adopt-set'
import { storeUpload } from '#server/services/store-upload'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'
import { cookieFor, routeFiles, serve } from './http'

/** A person of one site asks for everything of another: nothing is there, and nothing is changed. */
const t = await testContext()
const [own, theirs] = [await clinic(t), await clinic(t)]
const mine = /^\/api\/(?:patients|referrals|uploads|bookings|studies|bench|search|shelf|sites)/
const routes = await Promise.all(routeFiles().filter(route => mine.test(route.path)).map(async route => ({ ...route, handler: (await import(/* @vite-ignore */ route.file) as { default: EventHandler }).default })))
const { call } = serve(t, routes)

const everyRole = await t.makeUser({ roles: (['technologist', 'neurologist', 'administrator', 'medical-director'] as const).map(role => ({ siteId: own.site.id, role })) })
const cookie = await cookieFor(t, everyRole)
const patient = await t.makePatient({ familyName: 'Elsewhere', givenName: 'Eva' })
const study = await theirs.recording({ patientId: patient.id })
const run = (await theirs.study(study)).study.runs[0]!
const referral = (await theirs.study(study)).record.referralId
const upload = (await storeUpload(theirs.admin, { referralId: referral, name: 'a.pdf', bytes: Buffer.from('%PDF-1.4\n%%EOF') })).id
const adoption = (await proposeAdoption(theirs.neurologist, { siteId: theirs.site.id, setId: 'aanem-ndtf-2016', setVersion: 1, techniques: null, effectiveOn: '2026-12-02' })).id
const reason = { reason: 'because of a test' }
const form = await theirs.complete({ patientId: patient.id })

const everything: [string, string, unknown?][] = [
  ['GET', `/api/referrals/${referral}`], ['PUT', `/api/referrals/${referral}`, { ...form, revision: 1 }], ['POST', '/api/referrals', form],
  ['POST', `/api/referrals/${referral}/receive`, {}], ['POST', `/api/referrals/${referral}/accept`, { protocol: 'carpal-tunnel' }],
  ['POST', `/api/referrals/${referral}/return`, { reasons: ['side'] }], ['POST', `/api/referrals/${referral}/decline`, reason], ['POST', `/api/referrals/${referral}/cancel`, reason],
  ['POST', `/api/referrals/${referral}/book`, own.slot()], ['POST', `/api/referrals/${referral}/not-attended`, reason],
  ['POST', `/api/referrals/${referral}/arrive`, {}], ['POST', `/api/referrals/${referral}/start`, {}], ['POST', `/api/referrals/${referral}/uploads`, {}],
  ['POST', `/api/referrals/${referral}/remind`, {}], ['POST', `/api/referrals/${referral}/urgency`, { urgency: 'urgent', ...reason }], ['POST', `/api/referrals/${referral}/owner`, { ownerId: null }], ['POST', `/api/referrals/${referral}/answer-seen`, {}],
  ['GET', `/api/bookings/week?siteId=${theirs.site.id}`], ['GET', `/api/bookings/first-free?siteId=${theirs.site.id}&referralId=${referral}`],
  ['GET', `/api/sites/${theirs.site.id}/calendar`], ['PUT', `/api/sites/${theirs.site.id}/rooms`, { rooms: [{ name: 'X' }] }], ['PUT', `/api/sites/${theirs.site.id}/hours`, { hours: [] }],
  ['POST', `/api/sites/${theirs.site.id}/closed-days`, { day: '2026-12-24', reason: 'holiday' }], ['DELETE', `/api/sites/${theirs.site.id}/closed-days/2026-12-24`],
  ['GET', `/api/uploads/${upload}`], ['DELETE', `/api/uploads/${upload}`],
  ['GET', `/api/bookings/free?siteId=${theirs.site.id}&date=2026-12-03`], ['GET', `/api/bench?siteId=${theirs.site.id}`],
  ['GET', `/api/studies/${study}`], ['POST', `/api/studies/${study}/confirm`, { identifiers: ['name', 'birth-date'], side: 'right', cautionsRead: true }],
  ['PUT', `/api/studies/${study}/body-size`, { heightCm: 100, weightKg: 50 }], ['POST', `/api/studies/${study}/temperatures`, { segment: 'hand', side: 'right', celsius: 32 }],
  ['DELETE', `/api/studies/${study}/temperatures/none`], ['POST', `/api/studies/${study}/runs`, { technique: 'sural', side: 'right' }],
  ['PATCH', `/api/studies/${study}/runs/${run.id}`, { revision: 1 }], ['DELETE', `/api/studies/${study}/runs/${run.id}`, reason],
  ['POST', `/api/studies/${study}/runs/${run.id}/rows`, { site: 'axilla' }], ['DELETE', `/api/studies/${study}/rows/${run.rows[0]!.id}`, reason],
  ['PUT', `/api/studies/${study}/cells`, { cells: [{ saveId: 's', rowId: run.rows[0]!.id, field: 'latencyMs', entry: 4, revision: 0 }] }],
  ['POST', `/api/studies/${study}/kept-checks`, { key: 'k', reason: 'because' }], ['DELETE', `/api/studies/${study}/kept-checks?key=k`],
  ['POST', `/api/studies/${study}/hand-over`, {}], ['POST', `/api/studies/${study}/stop`, reason],
  ['POST', '/api/shelf/adoptions', { siteId: theirs.site.id, setId: 'aanem-ndtf-2016', setVersion: 1, effectiveOn: '2026-12-02' }],
  ['POST', `/api/shelf/adoptions/${adoption}/approve`, {}], ['POST', `/api/shelf/adoptions/${adoption}/end`, {}],
]

describe('ids of another site', () => {
  it.each(everything)('%s %s answers as if it did not exist', async (method, path, body) => {
    const events = async () => (await t.db.selectFrom('auditEvent').select(eb => eb.fn.countAll<number>().as('n')).where('name', '<>', 'access.refused').executeTakeFirstOrThrow()).n
    const before = await events()
    const answer = await call(method, path, { cookie, body })
    expect(answer).toMatchObject({ status: 404, body: { code: 'not-found' } })
    expect(await events()).toBe(before)
  })
  it('a row, run or temperature of another study is not reached through an own study', async () => {
    const ownStudy = await own.recording()
    expect((await call('PUT', `/api/studies/${ownStudy}/cells`, { cookie, body: { cells: [{ saveId: 's', rowId: run.rows[0]!.id, field: 'latencyMs', entry: 4, revision: 0 }] } })).body).toMatchObject({ cells: [{ saved: false, because: 'not-valid' }] })
    for (const [method, path, body] of [['PATCH', `runs/${run.id}`, { revision: 1 }], ['DELETE', `runs/${run.id}`, reason], ['DELETE', `rows/${run.rows[0]!.id}`, reason], ['POST', `runs/${run.id}/rows`, { site: 'axilla' }]] as const) {
      expect((await call(method, `/api/studies/${ownStudy}/${path}`, { cookie, body })).status).toBe(404)
    }
    expect((await theirs.study(study)).study.runs[0]).toMatchObject({ id: run.id, rows: [{ values: {} }, { values: {} }] })
  })
  it('lists and search show the person, who is the organisation\'s, and nothing of the other site', async () => {
    expect((await call('GET', '/api/patients?search=elsewhere', { cookie })).body).toMatchObject({ total: 1 })
    expect((await call('GET', '/api/search?words=elsewhere', { cookie })).body).toMatchObject({ patients: [{ id: patient.id }], referrals: [], studies: [] })
    expect((await call('GET', '/api/search?words=NCS-2026', { cookie })).body).toMatchObject({ referrals: [] })
    for (const query of ['search=elsewhere', `siteId=${theirs.site.id}`]) expect((await call('GET', `/api/referrals?${query}`, { cookie })).body).toMatchObject({ total: 0, rows: [] })
    const sets = (await call('GET', '/api/shelf/sets', { cookie })).body as unknown as { adoptedAt: { id: string }[] }[]
    expect(sets.flatMap(set => set.adoptedAt).map(one => one.id)).not.toContain(adoption)
  })
  it('there the same addresses work', async () => {
    const there = await cookieFor(t, theirs.technologistUser)
    expect((await call('GET', `/api/studies/${study}`, { cookie: there })).body).toMatchObject({ id: study, state: 'recording', patientId: patient.id })
    expect((await call('GET', `/api/referrals/${referral}`, { cookie: there })).body).toMatchObject({ id: referral, state: 'attended' })
    expect((await call('GET', `/api/bench?siteId=${theirs.site.id}`, { cookie: there })).body).toMatchObject([{ studyId: study }])
    expect((await call('GET', '/api/search?words=elsewhere', { cookie: there })).body).toMatchObject({ referrals: [{ id: referral }], studies: [{ id: study }] })
    expect((await call('DELETE', `/api/studies/${study}/runs/${run.id}`, { cookie: there })).body).toMatchObject({ code: 'not-valid', fields: [{ path: 'reason' }] })
  })
})

it('a referring physician reaches none of these rooms', async () => {
  const physician = await cookieFor(t, await t.makeUser({ roles: [{ siteId: own.site.id, role: 'referring-physician' }] }))
  for (const path of ['/api/patients', '/api/referrals', '/api/search?words=elsewhere', '/api/shelf/sets']) expect((await call('GET', path, { cookie: physician })).status).toBe(403)
})

it('opening a record is noted, once per look', async () => {
  const { flushViews } = await import('#server/services/record-view')
  await flushViews(t.context)
  const views = await t.db.selectFrom('viewEvent').select(['subject', 'subjectId', 'patientId']).where('actorId', '=', theirs.technologistUser.id).execute()
  expect(views).toContainEqual({ subject: 'study', subjectId: study, patientId: patient.id })
  expect(views).toContainEqual({ subject: 'referral', subjectId: referral, patientId: patient.id })
})
