import { randomUUID } from 'node:crypto'
import { sql } from 'kysely'
import { describe, expect, it } from 'vitest'
import { indicatorCases } from '#server/database/queries/indicators/index'
import { longRead } from '#server/services/long-read'
import { overview, overviewCases } from '#server/services/long-reads/overview'
import { figureOf, figureWords, indicatorIds, indicators, type IndicatorId } from '#shared/indicators'
import { testContext } from './helpers'

/** Invented work of three months at two sites, then every figure again by plain SQL. The sites keep UTC, so that a month is the first seven signs. */
const t = await testContext()
const north = await t.makeSite({ timeZone: 'UTC' })
const south = await t.makeSite({ timeZone: 'UTC' })
const people = await Promise.all([1, 2, 3].map(() => t.makeUser({ roles: ['technologist'] })))
const practices = await Promise.all([1, 2].map(() => t.makePractice()))
const physicians = await Promise.all(practices.map(practice => t.makePhysician({ practiceId: practice.id })))
const now = '2026-12-02T09:00:00.000Z'
const months = ['2026-10', '2026-11', '2026-12']

/** A number from 0 to 1 that is the same at every run. */
let seed = 7
function chance(): number {
  seed = (seed * 48271) % 2147483647
  return seed / 2147483647
}
const later = (at: string, hours: number) => new Date(Date.parse(at) + hours * 3_600_000).toISOString()
const pick = <T>(list: readonly T[]): T => list[Math.floor(chance() * list.length)]!

async function change(subjectId: string, toState: string, at: string, reason = '') {
  await t.db.insertInto('stateChange').values({ subject: 'referral', subjectId, fromState: null, toState, at, byUserId: null, reason }).execute()
}

async function bookingFor(referralId: string, siteId: string, createdAt: string, startsAt: string, state: 'booked' | 'attended' | 'did-not-attend' | 'cancelled', room: string) {
  await t.db.insertInto('booking').values({ id: randomUUID(), referralId, siteId, room, technologistId: null, startsAt, endsAt: later(startsAt, 0.5), state, reason: '', createdAt, createdBy: people[0]!.id }).execute()
}

async function deliveryFor(versionId: string, physician: number, siteId: string, signedAt: string, state: 'sent' | 'acknowledged' | 'withdrawn') {
  const sentAt = later(signedAt, 0.02 + chance() * 40)
  const acknowledgedAt = state === 'acknowledged' ? later(sentAt, chance() * 400) : null
  await t.db.insertInto('delivery').values({
    id: randomUUID(), reportVersionId: versionId, physicianId: physicians[physician]!.id, practiceId: practices[physician]!.id, siteId, address: 'reports@practice.example', method: 'encrypted-pdf',
    state, stateSince: state === 'withdrawn' ? later(sentAt, 2) : acknowledgedAt ?? sentAt, holdUntil: null, acknowledgeTokenHash: null, acknowledgedAt, sentAt, createdAt: signedAt,
  }).execute()
}

async function versionFor(reportId: string, version: number, status: 'final' | 'corrected' | 'appended', signedAt: string): Promise<string> {
  const id = randomUUID()
  await t.db.insertInto('reportVersion').values({ id, reportId, version, status, reason: '', snapshotJson: '{}', snapshotSha256: '', calculationVersion: '1', signedBy: people[0]!.id, signedAt, signedName: '', signedCredentials: '', meaning: '', auditHead: '' }).execute()
  return id
}

async function studyFor(referralId: string, patientId: string, siteId: string, startedAt: string, n: number) {
  const id = randomUUID()
  const handedOverAt = later(startedAt, 0.4 + chance())
  const state = chance() < 0.1 ? 'stopped' as const : chance() < 0.25 ? 'handed-over' as const : 'read' as const
  const checks = { 'unusual': { asked: 1 + Math.floor(chance() * 3), kept: 1 }, 'short-segment': { asked: 1, kept: chance() < 0.5 ? 1 : 0 } }
  await t.db.insertInto('study').values({
    id, number: `NCS-T-${n}`, referralId, patientId, siteId, state, stateSince: handedOverAt, studyDate: startedAt.slice(0, 10), startedAt, handedOverAt: state === 'stopped' ? null : handedOverAt,
    technologistId: pick(people).id, readerId: null, takenAt: null, protocol: null, heightCm: null, weightKg: null, confirmationJson: null, returnRunId: null, policyJson: null,
    summaryJson: JSON.stringify({ flagged: Math.floor(chance() * 3), runs: 2, openChecks: 0, checks, calculationVersion: '1' }), createdAt: startedAt,
  }).execute()
  for (const side of ['right', 'left'] as const) {
    const runId = randomUUID()
    const rowId = randomUUID()
    await t.db.insertInto('studyRun').values({ id: runId, studyId: id, technique: 'median-motor-apb', side, position: 1, settingsJson: side === 'left' && chance() < 0.2 ? '{"repeats":"x"}' : '{}', removedAt: null, createdAt: startedAt, createdBy: null }).execute()
    await t.db.insertInto('studyRow').values({ id: rowId, runId, site: 'wrist', position: 1, removedAt: null }).execute()
    await t.db.insertInto('studyCell').values({ rowId, field: 'latencyMs', studyId: id, entryJson: '3.4', revision: 1, savedAt: startedAt, savedBy: people[0]!.id }).execute()
    if (side === 'right' || chance() < 0.8) await t.db.insertInto('studyTemperature').values({ id: randomUUID(), studyId: id, segment: 'hand', side, celsius: 33, at: startedAt, removedAt: null, savedBy: people[0]!.id }).execute()
  }
  if (state === 'read') await reportFor(id, siteId, later(handedOverAt, 1 + chance() * 90), n)
}

async function reportFor(studyId: string, siteId: string, signedAt: string, n: number) {
  const id = randomUUID()
  await t.db.insertInto('report').values({ id, studyId, number: `REP-T-${n}`, readyFingerprint: null, draftedBy: null, draftedAt: signedAt, createdAt: signedAt }).execute()
  const first = await versionFor(id, 1, 'final', signedAt)
  const to = n % 2
  await deliveryFor(first, to, siteId, signedAt, chance() < 0.1 ? 'withdrawn' : chance() < 0.7 ? 'acknowledged' : 'sent')
  if (chance() > 0.25) return
  const correctedAt = later(signedAt, 60)
  const second = await versionFor(id, 2, chance() < 0.5 ? 'corrected' : 'appended', correctedAt)
  if (chance() < 0.8) await deliveryFor(second, to, siteId, correctedAt, 'sent')
}

const patients = await Promise.all(Array.from({ length: 30 }, () => t.makePatient()))
for (let n = 0; n < 120; n++) {
  const siteId = n % 3 === 0 ? south.id : north.id
  const receivedAt = later('2026-10-01T08:00:00.000Z', n * 12)
  const patientId = patients[n % patients.length]!.id
  const referral = await t.makeReferral({ siteId, patientId, receivedAt, urgency: n % 5 === 0 ? 'urgent' : 'routine', physicianId: physicians[n % 2]!.id, createdBy: people[0]!.id, state: 'accepted' })
  await change(referral.id, 'received', receivedAt)
  let completeAt = receivedAt
  if (chance() < 0.3) {
    await change(referral.id, 'returned', later(receivedAt, 2), pick(['clinical question missing', 'side missing']))
    completeAt = later(receivedAt, 30)
    await change(referral.id, 'received', completeAt)
  }
  if (n % 10 === 9) continue
  const bookedAt = later(completeAt, 3)
  const startsAt = later(bookedAt, 24 + Math.floor(chance() * 900))
  const kept = startsAt < now && chance() < 0.8
  await bookingFor(referral.id, siteId, bookedAt, startsAt, startsAt >= now ? 'booked' : kept ? 'attended' : pick(['did-not-attend', 'cancelled'] as const), `Room ${n}`)
  if (kept) await studyFor(referral.id, patientId, siteId, startsAt, n)
}

/** Plain SQL that gives, for a site and month: cases, and those that count; or, for times, the ordered hours. */
const sentTables = 'delivery d join report_version v on v.id = d.report_version_id'
const plain: Record<IndicatorId, string> = {
  'wait': `select (julianday(b.starts_at) - julianday((select max(at) from state_change where subject_id = r.id and to_state = 'received' and at <= b.created_at))) * 24 as hours from booking b join referral r on r.id = b.referral_id
    where b.created_at = (select min(created_at) from booking where referral_id = r.id) and r.site_id = :site and substr(b.created_at, 1, 7) = :month`,
  'returned': `select r.id in (select subject_id from state_change where to_state = 'returned') as counts from referral r where r.site_id = :site and substr(r.received_at, 1, 7) = :month`,
  'no-show': `select state = 'did-not-attend' as counts from booking where site_id = :site and substr(starts_at, 1, 7) = :month and state in ('attended', 'arrived', 'did-not-attend')`,
  'temperature': `select (select count(*) from study_temperature where study_id = s.id) = 2 as counts from study s where site_id = :site and substr(handed_over_at, 1, 7) = :month`,
  'cold-repeat': `select s.id in (select study_id from study_run where settings_json like '%repeats%') as counts from study s where site_id = :site and substr(handed_over_at, 1, 7) = :month`,
  'repeat-visit': `select (select count(*) from study e where e.patient_id = s.patient_id and e.state = 'stopped' and e.id != s.id and e.study_date <= s.study_date and julianday(s.study_date) - julianday(e.study_date) <= 90) > 0 as counts from study s where site_id = :site and substr(started_at, 1, 7) = :month`,
  'abnormal': `select json_extract(s.summary_json, '$.flagged') > 0 as counts from report_version v join report r on r.id = v.report_id join study s on s.id = r.study_id where v.version = 1 and s.site_id = :site and substr(v.signed_at, 1, 7) = :month`,
  'sign': `select (julianday(v.signed_at) - julianday(s.handed_over_at)) * 24 as hours from report_version v join report r on r.id = v.report_id join study s on s.id = r.study_id where v.version = 1 and s.site_id = :site and substr(v.signed_at, 1, 7) = :month`,
  'deliver': `select (julianday(d.sent_at) - julianday(v.signed_at)) * 24 as hours from ${sentTables} where d.site_id = :site and substr(v.signed_at, 1, 7) = :month`,
  'acknowledge': `select (julianday(acknowledged_at) - julianday(sent_at)) * 24 as hours from delivery where site_id = :site and substr(sent_at, 1, 7) = :month and acknowledged_at is not null`,
  'unsigned': `select 1 as counts from study where state = 'handed-over' and site_id = :site and substr(handed_over_at, 1, 7) = :month`,
  'later-version': `select (select count(*) from report_version where report_id = r.id) > 1 as counts from report_version v join report r on r.id = v.report_id join study s on s.id = r.study_id where v.version = 1 and s.site_id = :site and substr(v.signed_at, 1, 7) = :month`,
  'told-again': `select coalesce((select min(julianday(d2.sent_at)) - julianday(v2.signed_at) from delivery d2 where d2.report_version_id = v2.id and d2.physician_id = d.physician_id), 99) <= 1 as counts
    from ${sentTables} join report_version v2 on v2.report_id = v.report_id and v2.version = 2 where v.version = 1 and d.site_id = :site and d.sent_at <= v2.signed_at and substr(v2.signed_at, 1, 7) = :month`,
  'not-acknowledged': `select coalesce(julianday(acknowledged_at) - julianday(sent_at), 99) > 7 as counts from delivery where site_id = :site and substr(sent_at, 1, 7) = :month and state != 'withdrawn' and julianday('${now}') - julianday(sent_at) >= 7`,
  'withdrawn': `select 1 as counts from delivery where site_id = :site and state = 'withdrawn' and sent_at is not null and substr(state_since, 1, 7) = :month`,
  'kept-check': `select n <= json_extract(c.value, '$.kept') as counts from study s, json_each(s.summary_json, '$.checks') c, (select 1 as n union select 2 union select 3) where n <= json_extract(c.value, '$.asked') and site_id = :site and substr(handed_over_at, 1, 7) = :month`,
  'output': `select 1 as counts from study where site_id = :site and substr(handed_over_at, 1, 7) = :month`,
}

async function byPlainSql(id: IndicatorId, siteId: string, month: string): Promise<{ counts?: number, hours?: number }[]> {
  const text = plain[id].replaceAll(':site', `'${siteId}'`).replaceAll(':month', `'${month}'`)
  return (await sql.raw<{ counts?: number, hours?: number }>(text).execute(t.db)).rows
}

describe('every indicator, recomputed by plain SQL', async () => {
  const view = await overview(t.db, { siteIds: [north.id, south.id], now })
  it('covers the last twelve months', () => expect(view.months.slice(-3)).toEqual(months))
  it.each(indicatorIds)('%s', async (id) => {
    let cases = 0
    for (const site of [north, south]) {
      for (const month of months) {
        const rows = await byPlainSql(id, site.id, month)
        const figure = view.figures[id][site.id]![view.months.indexOf(month)]!
        expect([site.name, month, figure.cases]).toEqual([site.name, month, rows.length])
        cases += rows.length
        if (indicators[id].kind === 'share') expect(figure.counted).toBe(rows.filter(row => row.counts).length)
        if (indicators[id].kind === 'times' && rows.length) {
          const hours = rows.map(row => row.hours!).sort((a, b) => a - b)
          expect(figure.medianHours).toBeCloseTo(hours[Math.ceil(hours.length / 2) - 1]!, 6)
          expect(figure.ninetiethHours).toBeCloseTo(hours[Math.ceil(hours.length * 0.9) - 1]!, 6)
        }
      }
    }
    expect(cases).toBeGreaterThan(0)
  })
  it('studies per technologist and day', async () => {
    const { rows: [row] } = await sql.raw<{ studies: number, days: number }>(`select count(*) as studies, count(distinct technologist_id || substr(handed_over_at, 1, 10)) as days from study where site_id = '${north.id}' and substr(handed_over_at, 1, 7) = '2026-11'`).execute(t.db)
    expect(view.figures.output[north.id]![view.months.indexOf('2026-11')]!.perDay).toBeCloseTo(row!.studies / row!.days, 9)
  })
  it('the list behind a figure is what the figure counts', async () => {
    for (const id of indicatorIds) {
      const list = await overviewCases(t.db, { indicator: id, month: '2026-11', siteId: north.id, now })
      expect(list.figure).toEqual(view.figures[id][north.id]![view.months.indexOf('2026-11')])
      expect(list.cases.every(one => one.link.endsWith(one.subjectId))).toBe(true)
    }
  })
})

it('a month is that of the site\'s calendar', async () => {
  const east = await t.makeSite({ timeZone: 'Pacific/Auckland' })
  const receivedAt = '2026-09-30T12:30:00.000Z'
  await t.makeReferral({ siteId: east.id, receivedAt, createdBy: people[0]!.id })
  const view = await overview(t.db, { siteIds: [east.id], now })
  expect(view.figures.returned[east.id]!.map(figure => figure.cases)).toEqual(view.months.map(month => month === '2026-10' ? 1 : 0))
})

it('runs in a thread that can only read, with the same answer', async () => {
  const input = { siteIds: [north.id], now }
  expect(await longRead(t.context, 'overview', input)).toEqual(await overview(t.db, input))
}, 60_000)

it('asks only for the sites given', async () => {
  for (const id of indicatorIds) expect(await indicatorCases[id](t.db, { siteIds: [], from: '2026-01-01', until: '2027-01-01' }, now)).toEqual([])
})

describe('a figure', () => {
  it.each([
    { hours: [5], median: 5, ninetieth: 5 },
    { hours: [4, 2], median: 2, ninetieth: 4 },
    { hours: [1, 2, 3, 4, 5, 6, 7, 8, 9, 10], median: 5, ninetieth: 9 },
    { hours: [1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11], median: 6, ninetieth: 10 },
  ])('nearest rank of $hours', ({ hours, median, ninetieth }) => {
    expect(figureOf('times', hours.map(each => ({ hours: each, at: '' })))).toMatchObject({ medianHours: median, ninetiethHours: ninetieth })
  })
  it.each([
    { kind: 'share' as const, cases: [{ counts: true, at: '' }, { counts: false, at: '' }, { counts: false, at: '' }], words: '33.3 % (1 of 3)' },
    { kind: 'share' as const, cases: [], words: 'none' },
    { kind: 'count' as const, cases: [], words: '0' },
    { kind: 'times' as const, cases: [{ hours: 0.4, at: '' }, { hours: 100, at: '' }], words: '24 min, 90 % within 4.2 days (2)' },
    { kind: 'per-day' as const, cases: [{ personId: 'a', at: '2026-11-02' }, { personId: 'a', at: '2026-11-02' }, { personId: 'b', at: '2026-11-02' }], words: '1.5 (3 studies)' },
  ])('in words: $words', ({ kind, cases, words }) => expect(figureWords(kind, figureOf(kind, cases))).toBe(words))
})
