import { describe, expect, it } from 'vitest'
import { addRun, changeRun, removeRun } from '#server/services/save-run'
import { addRow, removeRow } from '#server/services/save-row'
import { askCautions } from '#server/services/ask-cautions'
import { addTemperature, removeTemperature } from '#server/services/save-temperature'
import { confirmStudy } from '#server/services/confirm-study'
import { handOverStudy, stopStudy } from '#server/services/hand-over-study'
import { keepCheck, reopenCheck } from '#server/services/keep-check'
import { moveState } from '#server/services/move-state'
import { noteArrival, startStudy } from '#server/services/start-study'
import { saveBodySize } from '#server/services/save-body-size'
import { viewBenchDay } from '#server/services/view-bench-day'
import { viewStudy } from '#server/services/view-study'
import { assessStoredStudy } from '#server/services/assess-stored-study'
import { plannedRuns, protocols } from '#shared/protocols'
import { bookReferral } from '#server/services/book-referral'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const by = c.technologist
const confirmation = { identifiers: ['name', 'birth-date'] as ('name' | 'birth-date')[], side: 'right' as const, sideReason: '', cautionsRead: true as const }
const runsOf = async (id: string) => (await c.study(id)).study.runs
const titles = async (id: string) => (await runsOf(id)).map(run => `${run.side} ${run.technique}`)
const carpalTunnel = protocols.find(protocol => protocol.id === 'carpal-tunnel')!
const [RIGHT, LEFT] = [plannedRuns(carpalTunnel, 'right'), plannedRuns(carpalTunnel, 'left')].map(runs => runs.map(run => `${run.side} ${run.technique}`)) as [string[], string[]]

describe('the day', () => {
  it('lists the bookings of the day in order, then what they became', async () => {
    const day = '2027-06-01'
    const [late, early] = [await c.accepted(), await c.accepted()]
    await bookReferral(c.admin, { id: late, ...c.slot({ date: day, time: '23:30', minutes: 20 }) })
    await bookReferral(c.admin, { id: early, ...c.slot({ date: day, time: '00:00' }) })
    t.clock.minutes(60)
    await noteArrival(by, { referralId: late })
    const list = await viewBenchDay(by, { siteId: c.site.id, date: day })
    expect(list.map(row => [row.referralId, row.state])).toEqual([[early, 'booked'], [late, 'arrived']])
    expect(list.at(-1)?.stateSince, 'since when the patient waits').toBe(t.context.clock().toISOString())
    const { studyId } = await startStudy(by, { referralId: late })
    const started = (await viewBenchDay(by, { siteId: c.site.id, date: day })).find(row => row.referralId === late)
    expect(started).toMatchObject({ studyId, state: 'planned', room: 'Room 1' })
    expect((await viewBenchDay(by, { siteId: c.site.id, date: '2027-06-03' })).filter(row => row.referralId === early)).toEqual([])
  })
  it('keeps unfinished studies of other days in sight, returned ones first, with the question', async () => {
    const id = await c.recording()
    await t.db.transaction().execute(async (trx) => {
      await moveState(c.technologist, trx, { subject: 'study', id, from: 'recording', to: 'handed-over' })
      await moveState(c.neurologist, trx, { subject: 'study', id, from: 'handed-over', to: 'returned', reason: 'Warm?' })
      await trx.updateTable('study').set({ returnQuestion: 'Warm?' }).where('id', '=', id).execute()
    })
    const [first] = await viewBenchDay(by, { siteId: c.site.id, date: '2027-08-01' })
    expect(first).toMatchObject({ studyId: id, state: 'returned', returnQuestion: 'Warm?' })
  })
  it('an arrival is noted once', async () => {
    const id = await c.booked()
    await noteArrival(by, { referralId: id })
    await expect(noteArrival(by, { referralId: id })).rejects.toMatchObject({ code: 'wrong-state' })
  })
})

describe('starting', () => {
  it('makes a numbered study of the local day with the runs of the protocol for the asked side', async () => {
    t.clock.set('2026-12-02T23:30:00.000Z')
    const id = await c.started()
    t.clock.set('2026-12-02T09:00:00.000Z')
    expect(await titles(id)).toEqual(RIGHT)
    const { record, plannedRunIds, study } = await c.study(id)
    expect(record).toMatchObject({ state: 'planned', studyDate: '2026-12-03', technologistId: c.technologistUser.id, protocol: 'carpal-tunnel' })
    expect(record.number).toMatch(/^NCS-2026-\d{6}$/)
    expect(plannedRunIds).toEqual(study.runs.map(run => run.id))
    expect(study.runs.find(run => run.technique === 'ulnar-motor-adm')!.rows.map(row => row.site)).toEqual(['wrist', 'below-elbow', 'above-elbow'])
    expect(study.runs.find(run => run.technique === 'median-sensory-d2')).toMatchObject({ direction: 'antidromic', amplitudeDefinition: 'onset-to-peak' })
    const referral = await t.db.selectFrom('referral').select('state').where('id', '=', record.referralId).executeTakeFirstOrThrow()
    expect(referral.state).toBe('attended')
  })
  it.each([['both', 8], ['midline', 8], ['left', 4]] as const)('lays out %s as %i runs', async (side, count) => {
    expect(await titles(await c.started({ side }))).toHaveLength(count)
  })
  it('needs a booking', async () => {
    await expect(startStudy(by, { referralId: await c.accepted() })).rejects.toMatchObject({ code: 'wrong-state' })
  })
})

describe('confirming', () => {
  it('opens recording; before it nothing can be recorded', async () => {
    const id = await c.started()
    await expect(saveBodySize(by, { id, heightCm: 162, weightKg: 74 })).rejects.toMatchObject({ code: 'wrong-state', options: { message: 'Confirm identity, side and cautions first.' } })
    expect(await confirmStudy(by, { id, ...confirmation })).toMatchObject({ side: 'right', byName: c.technologistUser.name, at: '2026-12-02T09:00:00.000Z' })
    await saveBodySize(by, { id, heightCm: 162, weightKg: 74 })
    expect((await viewStudy(by, id))).toMatchObject({ state: 'recording', mayRecord: true, mayRead: false, study: { heightCm: 162, weightKg: 74 }, band: { heightCm: 162 } })
  })
  it('needs two different identifiers', async () => {
    const id = await c.started()
    await expect(confirmStudy(by, { id, ...confirmation, identifiers: ['name', 'name'] })).rejects.toMatchObject({ options: { fields: [{ path: 'identifiers' }] } })
  })
  it('asks why when the side differs from the referral, and then lays out the other side', async () => {
    const id = await c.started()
    await expect(confirmStudy(by, { id, ...confirmation, side: 'left' })).rejects.toMatchObject({ options: { fields: [{ path: 'sideReason', message: 'The referral says RIGHT. Say why the side differs.' }] } })
    expect(await titles(id)).toEqual(RIGHT)
    await confirmStudy(by, { id, ...confirmation, side: 'left', sideReason: 'The patient says left; the referring physician agreed.' })
    expect(await titles(id)).toEqual(LEFT)
  })
  it('never takes away a run that has values', async () => {
    const id = await c.recording()
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 4 }])
    await confirmStudy(by, { id, ...confirmation, side: 'left', sideReason: 'told so' })
    expect(await titles(id)).toEqual(['right median-motor-apb', ...LEFT])
  })
  it('what was not asked is asked at the bench, an answer that is not true today is corrected, and the trail keeps both', async () => {
    const id = await c.started({ cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no', 'lymphoedema': 'not-asked' } })
    await askCautions(by, { id, answers: { 'lymphoedema': 'yes', 'cardiac-device': 'no' } })
    expect((await viewStudy(by, id)).band.cautions).toEqual(['lymphoedema'])
    await askCautions(by, { id, answers: { 'temporary-pacing-wire': 'yes' } })
    await expect(confirmStudy(by, { id, ...confirmation })).rejects.toMatchObject({ code: 'not-valid', options: { message: expect.stringContaining('temporary pacing wire') } })
    await askCautions(by, { id, answers: { 'temporary-pacing-wire': 'no' } })
    await confirmStudy(by, { id, ...confirmation })
    const kept = await t.db.selectFrom('auditEvent').select('dataJson').where('subjectId', '=', id).where('name', '=', 'study.cautions-asked').orderBy('seq').execute()
    expect(kept.map(event => JSON.parse(event.dataJson) as unknown)).toEqual([
      { changes: [{ field: 'lymphoedema', before: 'not-asked', after: 'yes' }] },
      { changes: [{ field: 'temporary-pacing-wire', before: 'no', after: 'yes' }] },
      { changes: [{ field: 'temporary-pacing-wire', before: 'yes', after: 'no' }] },
    ])
    await askCautions(by, { id, answers: { lymphoedema: 'yes' } })
    expect(await t.db.selectFrom('auditEvent').select('id').where('subjectId', '=', id).where('name', '=', 'study.cautions-asked').execute()).toHaveLength(3)
  })
  it('no caution of a study that is closed is changed', async () => {
    const id = await c.started()
    await stopStudy(by, { id, reason: 'not today' })
    await expect(askCautions(by, { id, answers: { lymphoedema: 'yes' } })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('stops at a temporary pacing wire, with the reason', async () => {
    const id = await c.started({ cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'yes' } })
    await expect(confirmStudy(by, { id, ...confirmation })).rejects.toMatchObject({ code: 'not-valid', options: { message: expect.stringContaining('temporary pacing wire') } })
    expect((await c.study(id)).record.state).toBe('planned')
    await stopStudy(by, { id, reason: 'temporary pacing wire in place' })
    expect((await c.study(id)).record).toMatchObject({ state: 'stopped', stateReason: 'temporary pacing wire in place' })
    expect(await t.db.selectFrom('task').select(['kind', 'ownerRole']).where('siteId', '=', c.site.id).execute()).toContainEqual({ kind: 'study-stopped', ownerRole: 'administrator' })
  })
})

describe('temperatures', () => {
  const hand = { segment: 'hand' as const, side: 'right' as const, method: 'skin probe', warmed: false }
  it('a second reading of a limb leaves earlier runs with the earlier one; blank runs and the other side follow the new one', async () => {
    const id = await c.recording({ side: 'both' })
    const cold = await addTemperature(by, { id, ...hand, celsius: 29.4 })
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2 }])
    await c.type(id, 'median-motor-apb', 'left', [{ latencyMs: 3.9 }])
    t.clock.minutes(20)
    await addTemperature(by, { id, ...hand, celsius: 32.6, warmed: true })
    const bound = (await runsOf(id)).filter(run => run.temperatureId)
    expect(bound.map(run => [run.side, run.technique, run.temperatureId])).toEqual([['right', 'median-motor-apb', cold.id]])
    expect((await c.study(id)).study.temperatures.map(reading => [reading.celsius, reading.warmed])).toEqual([[29.4, false], [32.6, true]])
  })
  it('a reading noted later for an earlier time binds nothing', async () => {
    const id = await c.recording()
    await addTemperature(by, { id, ...hand, celsius: 32 })
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2 }])
    await addTemperature(by, { id, ...hand, celsius: 29, at: '2026-12-02T08:00:00Z' })
    expect((await runsOf(id)).filter(run => run.temperatureId)).toEqual([])
  })
  it('a removed reading sets its runs free', async () => {
    const id = await c.recording()
    const wrong = await addTemperature(by, { id, ...hand, celsius: 23.6 })
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2 }])
    await addTemperature(by, { id, ...hand, celsius: 32.6 })
    await removeTemperature(by, { id, temperatureId: wrong.id })
    expect((await runsOf(id)).filter(run => run.temperatureId)).toEqual([])
    await expect(removeTemperature(by, { id, temperatureId: wrong.id })).rejects.toMatchObject({ code: 'not-found' })
  })
  it('takes one decimal', async () => {
    await expect(addTemperature(by, { id: await c.recording(), ...hand, celsius: 32.65 })).rejects.toMatchObject({ options: { fields: [{ path: 'celsius' }] } })
  })
})

describe('runs and rows', () => {
  it('the mirrored run has the same stimulation sites and no values', async () => {
    const id = await c.recording()
    const right = (await runsOf(id))[0]!
    await addRow(by, { id, runId: right.id, site: 'axilla' })
    await c.type(id, right.technique, 'right', [{ latencyMs: 4 }])
    const { runId } = await addRun(by, { id, technique: right.technique, side: 'left' })
    const mirror = (await runsOf(id)).find(run => run.id === runId)!
    expect(mirror.rows.map(row => [row.site, row.values])).toEqual([['wrist', {}], ['elbow', {}], ['axilla', {}]])
  })
  it('rows stand distal to proximal however they are added', async () => {
    const id = await c.recording()
    const run = (await runsOf(id)).find(one => one.technique === 'ulnar-motor-adm')!
    await addRow(by, { id, runId: run.id, site: 'axilla' })
    await addRow(by, { id, runId: run.id, site: 'palm' })
    expect((await runsOf(id)).find(one => one.id === run.id)!.rows.map(row => row.site)).toEqual(['palm', 'wrist', 'below-elbow', 'above-elbow', 'axilla'])
    await expect(addRow(by, { id, runId: run.id, site: 'knee' })).rejects.toMatchObject({ options: { fields: [{ path: 'site' }] } })
  })
  it('a repeat stands behind the run it repeats, and must be of the same nerve and side', async () => {
    const id = await c.recording({ side: 'both' })
    const [first, second] = await runsOf(id)
    const { runId } = await addRun(by, { id, technique: first!.technique, side: first!.side, repeats: first!.id })
    expect((await runsOf(id)).map(run => run.id).slice(0, 3)).toEqual([first!.id, runId, second!.id])
    expect((await runsOf(id))[1]).toMatchObject({ repeats: first!.id })
    await expect(addRun(by, { id, technique: first!.technique, side: first!.side, repeats: second!.id })).rejects.toMatchObject({ options: { fields: [{ path: 'repeats' }] } })
  })
  it('a run that is empty and not planned goes without a reason; others need one', async () => {
    const id = await c.recording()
    const { runId } = await addRun(by, { id, technique: 'sural', side: 'right' })
    await removeRun(by, { id, runId, reason: '' })
    const planned = (await runsOf(id))[0]!
    await expect(removeRun(by, { id, runId: planned.id, reason: '' })).rejects.toMatchObject({ options: { fields: [{ path: 'reason', message: 'The protocol plans this run. Say why it is removed.' }] } })
    const other = await addRun(by, { id, technique: 'sural', side: 'left' })
    await c.type(id, 'sural', 'left', [{ onsetLatencyMs: 3 }])
    await expect(removeRun(by, { id, runId: other.runId, reason: '' })).rejects.toMatchObject({ options: { fields: [{ path: 'reason', message: 'The run has values. Say why it is removed.' }] } })
    await removeRun(by, { id, runId: other.runId, reason: 'wrong patient position' })
    expect(await titles(id)).toEqual(RIGHT)
    await expect(removeRun(by, { id, runId: other.runId, reason: 'again' })).rejects.toMatchObject({ code: 'not-found' })
  })
  it('a row with values needs a reason', async () => {
    const id = await c.recording()
    await c.type(id, 'median-motor-apb', 'right', [{}, { latencyMs: 9.2 }])
    const [wrist, elbow] = (await runsOf(id))[0]!.rows
    await expect(removeRow(by, { id, rowId: elbow!.id, reason: '' })).rejects.toMatchObject({ code: 'not-valid' })
    await removeRow(by, { id, rowId: elbow!.id, reason: 'measured at the wrong place' })
    expect((await runsOf(id))[0]!.rows.map(row => row.id)).toEqual([wrist!.id])
  })
  it('settings change by compare-and-set, and an empty reason takes "not done" away', async () => {
    const id = await c.recording()
    const runId = (await runsOf(id))[0]!.id
    expect(await changeRun(by, { id, runId, revision: 1, notDoneBecause: 'amputated', quality: { grade: 'poor', reasons: ['oedema'], note: '' } })).toEqual({ revision: 2 })
    await expect(changeRun(by, { id, runId, revision: 1, elbowFlexionDegrees: 90 })).rejects.toMatchObject({ code: 'changed-meanwhile', options: { details: { theirs: { notDoneBecause: 'amputated', revision: 2 } } } })
    await changeRun(by, { id, runId, revision: 2, notDoneBecause: '' })
    expect((await runsOf(id))[0]).toMatchObject({ quality: { grade: 'poor' } })
    expect((await runsOf(id))[0]).not.toHaveProperty('notDoneBecause')
  })
  it('a run takes only a temperature of its own limb and side', async () => {
    const id = await c.recording()
    const left = await addTemperature(by, { id, segment: 'hand', side: 'left', celsius: 32, method: 'skin probe', warmed: false })
    await expect(changeRun(by, { id, runId: (await runsOf(id))[0]!.id, revision: 1, temperatureId: left.id })).rejects.toMatchObject({ options: { fields: [{ path: 'temperatureId' }] } })
  })
})

describe('handing over', () => {
  const values: [string, Record<string, number>[]][] = [
    ['median-motor-apb', [{ latencyMs: 5.2, amplitudeMv: 6.8, distanceMm: 80 }, { latencyMs: 9.2, amplitudeMv: 6.5, distanceMm: 215 }]],
    ['median-sensory-d2', [{ onsetLatencyMs: 3.8, peakLatencyMs: 4.6, amplitudeUv: 12, distanceMm: 140 }]],
    ['ulnar-sensory-d5', [{ onsetLatencyMs: 2.7, peakLatencyMs: 3.3, amplitudeUv: 14, distanceMm: 140 }]],
    ['ulnar-motor-adm', [{ latencyMs: 2.9, amplitudeMv: 9.6, distanceMm: 80 }, { latencyMs: 6.4, amplitudeMv: 9.4, distanceMm: 205 }, { latencyMs: 8.1, amplitudeMv: 9.2, distanceMm: 100 }]],
  ]
  const measured = async () => {
    const id = await c.recording()
    for (const [technique, rows] of values) await c.type(id, technique, 'right', rows)
    return id
  }
  const missing = async (id: string) => {
    const error = await handOverStudy(by, { id, note: '' }).catch((reason: unknown) => reason)
    return (error as { options: { details: { missing: { key: string, sentence: string }[] } } }).options.details.missing
  }
  it('lists planned runs without values, and takes the reason why they were not done', async () => {
    const id = await measured()
    const { runId } = await addRun(by, { id, technique: 'sural', side: 'right' })
    await removeRun(by, { id, runId, reason: '' })
    const ulnar = (await runsOf(id)).find(run => run.technique === 'ulnar-motor-adm')!
    for (const row of ulnar.rows) await removeRow(by, { id, rowId: row.id, reason: 'wrong electrode' })
    expect(await missing(id)).toEqual([{ key: `not-done/${ulnar.id}`, runId: ulnar.id, sentence: 'RIGHT ulnar motor, abductor digiti minimi was planned and has no values. Enter them, or say why it was not done.' }])
    await changeRun(by, { id, runId: ulnar.id, revision: 1, notDoneBecause: 'the patient could not go on' })
    await handOverStudy(by, { id, note: 'cooperative' })
    expect((await c.study(id)).record).toMatchObject({ state: 'handed-over', handOverNote: 'cooperative', handedOverAt: t.context.clock().toISOString() })
  })
  it('refuses while a value stands that cannot be right', async () => {
    const id = await measured()
    await c.type(id, 'median-motor-apb', 'right', [{}, { latencyMs: 5.1 }])
    const stops = (await assessStoredStudy(t.context, id)).assessment.remarks.filter(remark => remark.strength === 'stop')
    expect(stops.length).toBeGreaterThan(0)
    expect((await missing(id)).map(item => item.key)).toEqual(stops.map(stop => stop.key))
    expect((await c.study(id)).record.state).toBe('recording')
  })
  it('an empty study is stopped, not handed over', async () => {
    const id = await c.recording()
    expect((await missing(id)).at(-1)).toMatchObject({ key: 'nothing-recorded' })
  })
  it('keeps a summary for lists, closes recording, and shows it on the route', async () => {
    const id = await measured()
    await handOverStudy(by, { id, note: '' })
    const { record } = await c.study(id)
    expect(JSON.parse(record.summaryJson!)).toMatchObject({ runs: 4, flagged: 0 })
    await expect(c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.3 }])).rejects.toMatchObject({ code: 'wrong-state' })
    await expect(handOverStudy(by, { id, note: '' })).rejects.toMatchObject({ code: 'wrong-state' })
    const view = await viewStudy(c.neurologist, id)
    expect(view.route.map(node => [node.id, node.state, node.words])).toEqual([['intake', 'done', 'attended'], ['bench', 'done', 'handed over'], ['reading', 'here', 'waits for a reader'], ['dispatch', 'ahead', '']])
    expect(view).toMatchObject({ mayRecord: false, mayRead: true })
    expect(await eventNames(t, id)).toContain('study.handed-over')
  })
})

describe('questions and readiness', () => {
  it('keeps and reopens a questioned value', async () => {
    const id = await c.recording()
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 19.5, amplitudeMv: 6, distanceMm: 80 }])
    const { key, sentence } = (await assessStoredStudy(t.context, id)).assessment.remarks.find(remark => remark.code === 'unusual')!
    await keepCheck(by, { id, key, reason: 'measured twice' })
    await keepCheck(by, { id, key, reason: 'measured three times' })
    const row = (await c.study(id)).study.runs.find(run => run.technique === 'median-motor-apb')!.rows[0]!.id
    expect((await c.study(id)).study.keptChecks).toEqual([{ key, reason: 'measured three times', sentence, cells: { [`${row}/latencyMs`]: 19.5 } }])
    await reopenCheck(by, { id, key })
    expect((await c.study(id)).study.keptChecks).toEqual([])
    await expect(reopenCheck(by, { id, key })).rejects.toMatchObject({ code: 'not-found' })
    await expect(keepCheck(by, { id, key: 'a/b', reason: 'measured twice' })).rejects.toMatchObject({ code: 'not-valid' })
  })
  it('any change of a returned study takes back "ready to sign" and says so once', async () => {
    const id = await c.recording()
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2 }])
    const reportId = `report-of-${id}`
    await t.db.insertInto('report').values({ id: reportId, studyId: id, number: `REP-${id}`, readyFingerprint: 'f', draftedBy: null, draftedAt: '2026-12-02T09:00:00.000Z', createdAt: '2026-12-02T09:00:00.000Z' }).execute()
    await t.db.transaction().execute(async (trx) => {
      await moveState(by, trx, { subject: 'study', id, from: 'recording', to: 'handed-over' })
      await moveState(c.neurologist, trx, { subject: 'study', id, from: 'handed-over', to: 'returned' })
    })
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 4.2 }])
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2 }])
    expect(await eventNames(t, reportId)).toEqual(['report.ready-withdrawn'])
    expect(await t.db.selectFrom('report').select('readyFingerprint').where('id', '=', reportId).executeTakeFirst()).toEqual({ readyFingerprint: null })
  })
  it('the fingerprint changes with a value and comes back with it', async () => {
    const id = await c.recording()
    const fingerprint = async () => (await assessStoredStudy(t.context, id)).fingerprint
    const empty = await fingerprint()
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2 }])
    const before = await fingerprint()
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 4.2 }])
    expect(new Set([empty, before, await fingerprint()]).size).toBe(3)
    await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.2 }])
    expect(await fingerprint()).toBe(before)
  })
})
