import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { addEquipment, changeEquipment } from '#server/services/equipment'
import { askTechnicalReport, closeStopped } from '#server/services/after-stop'
import { bookReferral } from '#server/services/book-referral'
import { commentOnStudy } from '#server/services/comment-on-study'
import { confirmStudy } from '#server/services/confirm-study'
import { askCautions } from '#server/services/ask-cautions'
import { noteLaterEntry, startVisit } from '#server/services/continue-study'
import { handOverStudy, stopStudy } from '#server/services/hand-over-study'
import { checkMovedValues, enterStudyInError, moveStudy } from '#server/services/move-study'
import { saveBodySize } from '#server/services/save-body-size'
import { saveCircumstances } from '#server/services/save-circumstances'
import { addTemperature } from '#server/services/save-temperature'
import { assessStoredStudy } from '#server/services/assess-stored-study'
import { buildSnapshot, signatureOf } from '#server/services/build-snapshot'
import { readingFacts } from '#server/services/reading-facts'
import { reportBlocks } from '#shared/report'
import { viewReading } from '#server/services/view-reading'
import { saveDraft } from '#server/services/save-draft'
import { localDate, localTime } from '#server/services/site-time'
import { noteArrival, startStudy, undoArrival } from '#server/services/start-study'
import { readUpload, removeUpload, storeUpload } from '#server/services/store-upload'
import { changeRun } from '#server/services/save-run'
import { signProven } from '#server/services/sign-report'
import { viewBenchDay } from '#server/services/view-bench-day'
import { viewStudy } from '#server/services/view-study'
import { approvePolicy, proposePolicy } from '#server/services/policies'
import { protocols } from '#shared/protocols'
import { walkIn } from '#server/services/walk-in'
import { meanings } from '#shared/schemas/report'
import { walkInSchema } from '#shared/schemas/bench-day'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'

/** The day at the bench, and what is done when it goes wrong. */
const t = await testContext()
const c = await clinic(t)
const refusal = (act: Promise<unknown>) => act.then(() => 'done', (error: { code?: string }) => error.code ?? String(error))
const referralOf = async (studyId: string) => t.db.selectFrom('study').innerJoin('referral', 'referral.id', 'study.referralId').selectAll('referral').where('study.id', '=', studyId).executeTakeFirstOrThrow()
/** All words of the report as it would be signed now. */
async function reportText(id: string): Promise<string> {
  const facts = await readingFacts(c.neurologist, t.db, id)
  const signature = await signatureOf(c.neurologist, t.db, meanings[0], '2026-12-10T09:00:00.000Z', facts.site.timeZone)
  const snapshot = await buildSnapshot(c.neurologist, t.db, facts, { number: 'NCS-1', signature })
  return JSON.stringify(reportBlocks({ snapshot, sha256: null, auditHead: null, preliminary: true, versions: [] }))
}
const stateOf = async (studyId: string) => (await t.db.selectFrom('study').select('state').where('id', '=', studyId).executeTakeFirstOrThrow()).state
const values = { latencyMs: 3.4, amplitudeMv: 9.1 }
const confirmed = { identifiers: ['name' as const, 'birth-date' as const], side: 'right' as const, sideReason: '', cautionsRead: true as const }
const blank = { room: '', supervision: null, supervisorId: null, equipmentIds: [] as string[], tolerance: null, toleranceNote: '', told: '', revision: 0 }

describe('equipment, supervision, tolerance', async () => {
  const machine = await addEquipment(c.admin, { siteId: c.site.id, name: 'Machine 2', serial: 'A14', kind: 'amplifier', calibrationDue: '2026-03-01', safetyDue: '2027-01-01' })

  it('an overdue date is said and refuses nothing', async () => {
    const id = await c.recording()
    await saveCircumstances(c.technologist, { id, ...blank, room: 'Room 1', supervision: 'in-suite', supervisorId: c.neurologist.actor.userId, equipmentIds: [machine.id], tolerance: 'with-discomfort', toleranceNote: 'tender wrist', revision: 1 })
    const { around } = await viewStudy(c.technologist, id)
    expect(around.overdue).toEqual(['Machine 2 (A14): calibration was due on 1 March 2026.'])
    expect(around.circumstances).toMatchObject({ room: 'Room 1', supervision: 'in-suite', tolerance: 'with-discomfort', revision: 2 })
    expect(around.circumstances.supervisorName).not.toBe('')
    expect(await eventNames(t, id)).toContain('study.circumstances-saved')
  })

  it('the room of the booking stands there already', async () => {
    expect((await viewStudy(c.technologist, await c.started())).around.circumstances.room).toBe('Room 1')
  })

  it.each([
    ['a room that the site has not', { room: 'Cellar' }, 'not-valid'],
    ['a supervisor who signs nothing', { supervisorId: 'technologist' }, 'not-valid'],
    ['equipment of nowhere', { equipmentIds: ['none'] }, 'not-valid'],
    ['an old revision', { revision: 0 }, 'changed-meanwhile'],
  ])('%s is refused', async (_what, change, code) => {
    const id = await c.recording()
    const supervisorId = 'supervisorId' in change ? c.technologistUser.id : null
    expect(await refusal(saveCircumstances(c.technologist, { id, ...blank, revision: 1, ...change, supervisorId }))).toBe(code)
  })

  it('a device is changed by its revision, and a retired one is no longer offered but stays with its studies', async () => {
    const id = await c.recording()
    await saveCircumstances(c.technologist, { id, ...blank, equipmentIds: [machine.id], revision: 1 })
    const changed = await changeEquipment(c.admin, { id: machine.id, revision: 1, calibrationDue: '2027-06-01', retired: true })
    expect(changed).toMatchObject({ revision: 2, retired: true, calibrationDue: '2027-06-01', safetyDue: '2027-01-01' })
    expect(await refusal(changeEquipment(c.admin, { id: machine.id, revision: 1, name: 'Other' }))).toBe('changed-meanwhile')
    const view = await viewStudy(c.technologist, id)
    expect(view.choices.equipment).toEqual([])
    expect(view.around.circumstances.equipment.map(each => each.name)).toEqual(['Machine 2'])
  })
})

describe('attachments and comments', () => {
  const png = readFileSync('tests/fixtures/trace.png')

  it('a photograph of the traces is kept sealed with the study, read by the reader and by nobody who may not see values', async () => {
    const id = await c.recording()
    const kept = await storeUpload(c.technologist, { studyId: id, name: '../trace.exe', bytes: png })
    expect(kept).toMatchObject({ originalName: 'trace.png', mediaType: 'image/png' })
    expect((await readUpload(c.neurologist, kept.id)).mediaType).toBe('image/png')
    expect(await refusal(readUpload(c.admin, kept.id))).toBe('not-allowed')
    expect((await viewStudy(c.neurologist, id)).around.attachments.map(each => each.id)).toEqual([kept.id])
    await removeUpload(c.technologist, kept.id)
    expect((await viewStudy(c.neurologist, id)).around.attachments).toEqual([])
  })

  it('what is no picture is refused, whatever its name', async () => {
    expect(await refusal(storeUpload(c.technologist, { studyId: await c.recording(), name: 'trace.png', bytes: Buffer.from('<svg onload="x()"/>') }))).toBe('wrong-file-type')
  })

  it('a comment stands with its run and its author', async () => {
    const id = await c.recording()
    const runId = (await c.study(id)).study.runs[0]!.id
    await commentOnStudy(c.technologist, { id, text: 'Repeated twice, the same.', runId })
    expect((await viewStudy(c.neurologist, id)).around.comments).toMatchObject([{ runId, text: 'Repeated twice, the same.' }])
    expect(await refusal(commentOnStudy(c.technologist, { id, text: 'x', runId: 'none' }))).toBe('not-valid')
  })
})

describe('a study begun under the wrong patient', async () => {
  async function mistaken() {
    const wrong = await c.recording()
    const run = (await c.study(wrong)).study.runs.find(one => one.technique === 'median-motor-apb')!
    await c.type(wrong, 'median-motor-apb', 'right', [values, { latencyMs: 7.6, amplitudeMv: 8.8, distanceMm: 230 }])
    const reading = await addTemperature(c.technologist, { id: wrong, segment: 'hand', side: 'right', celsius: 33.1, method: 'skin probe', warmed: false })
    await changeRun(c.technologist, { id: wrong, runId: run.id, revision: (await c.study(wrong)).runRevisions[run.id]!, temperatureId: reading.id })
    await saveBodySize(c.technologist, { id: wrong, heightCm: 170, weightKg: 70 })
    return wrong
  }
  const wrong = await mistaken()
  const right = await c.booked({ patientId: (await t.makePatient({ birthDate: '1950-01-01' })).id })
  const { studyId } = await moveStudy(c.technologist, { id: wrong, toReferralId: right, reason: 'The other patient of the same name lay there.' })

  it('is entered in error there, and its referral waits for its day again', async () => {
    expect(await stateOf(wrong)).toBe('entered-in-error')
    expect((await referralOf(wrong)).state).toBe('booked')
    expect((await t.db.selectFrom('task').select('kind').where('subjectId', '=', (await referralOf(wrong)).id).execute()).map(task => task.kind)).toEqual(['study-in-error'])
    expect(await eventNames(t, wrong)).toContain('study.moved-away')
  })

  it('the values stand in the right record, with their temperature, by the right age, and without height', async () => {
    const { study, record } = await c.study(studyId)
    expect(record).toMatchObject({ state: 'planned', heightCm: null, confirmationJson: null })
    expect(study.patient.birthDate).toBe('1950-01-01')
    const moved = study.runs.filter(run => run.technique === 'median-motor-apb')
    expect(moved).toHaveLength(1)
    expect(moved[0]!.rows.map(row => row.values)).toEqual([values, { latencyMs: 7.6, amplitudeMv: 8.8, distanceMm: 230 }])
    expect(study.temperatures).toMatchObject([{ celsius: 33.1 }])
    expect(moved[0]!.temperatureId).toBe(study.temperatures[0]!.id)
    expect((await c.study(wrong)).study.runs.find(run => run.technique === 'median-motor-apb')!.rows[0]!.values).toEqual(values)
  })

  it('both name each other by number', async () => {
    const [from, to] = [await viewStudy(c.technologist, wrong), await viewStudy(c.technologist, studyId)]
    expect(from.around.move).toMatchObject({ direction: 'to', number: to.number })
    expect(to.around.move).toMatchObject({ direction: 'from', number: from.number, checkedAt: null })
  })

  it('is not handed over before the values were looked at again', async () => {
    await confirmStudy(c.technologist, { id: studyId, ...confirmed })
    expect(await refusal(handOverStudy(c.technologist, { id: studyId, note: '' }))).toBe('not-ready')
    await checkMovedValues(c.technologist, { id: studyId })
    const missing = await handOverStudy(c.technologist, { id: studyId, note: '' }).then(() => [], (error: { options: { details: { missing: { key: string }[] } } }) => error.options.details.missing)
    expect(missing.map(item => item.key)).not.toContain('moved-values')
  })

  it('cannot be moved twice, nor to the same patient', async () => {
    expect(await refusal(moveStudy(c.technologist, { id: wrong, toReferralId: await c.booked(), reason: 'again' }))).toBe('wrong-state')
    const other = await c.recording()
    const again = await c.booked({ patientId: (await referralOf(other)).patientId })
    expect(await refusal(moveStudy(c.technologist, { id: other, toReferralId: again, reason: 'again' }))).toBe('not-valid')
  })

  it('a room that was given away meanwhile is not booked twice: the referral is to be booked again', async () => {
    const id = await c.recording()
    const referral = await referralOf(id)
    const booking = await t.db.selectFrom('booking').selectAll().where('referralId', '=', referral.id).executeTakeFirstOrThrow()
    const starts = new Date(booking.startsAt)
    await bookReferral(c.admin, { id: await c.accepted(), ...c.slot({ date: localDate(starts, c.site.timeZone), time: localTime(starts, c.site.timeZone), minutes: 30 }) })
    await enterStudyInError(c.technologist, { id, reason: 'Opened by mistake.' })
    expect((await referralOf(id)).state).toBe('accepted')
    expect(await t.db.selectFrom('booking').select(['state', 'reason']).where('id', '=', booking.id).executeTakeFirst()).toEqual({ state: 'cancelled', reason: 'Opened by mistake.' })
    expect(await eventNames(t, referral.id)).toContain('referral.reopened')
  })
})

describe('a stopped study', () => {
  async function stopped({ measured }: { measured: boolean }) {
    const id = await c.recording()
    if (measured) await c.type(id, 'median-motor-apb', 'right', [values])
    await stopStudy(c.technologist, { id, reason: 'The patient felt faint.' })
    return id
  }

  it('with values goes to the reader as a technical report that says why, and answers its referral', async () => {
    const id = await stopped({ measured: true })
    await askTechnicalReport(c.technologist, { id })
    const reading = await viewReading(c.neurologist, id)
    expect(reading.draft).toMatchObject({ technicalOnly: true, limitations: ['The study was stopped: The patient felt faint.'] })
    const draft = { ...reading.draft, resolved: reading.checks.filter(check => check.answerable).map(check => ({ key: check.key, about: check.about, reason: 'The study was stopped.' })) }
    const { view } = await saveDraft(c.neurologist, { studyId: id, draft, revision: reading.draftRevision })
    expect(view.checks.filter(check => check.strength === 'stop' && !check.resolvedBecause)).toEqual([])
    await signProven(c.neurologist, { studyId: id, meaning: meanings[1], draftRevision: view.draftRevision, fingerprint: view.fingerprint })
    expect((await referralOf(id)).state).toBe('answered')
    expect(await reportText(id)).toContain('The study was stopped: The patient felt faint.')
    expect(await t.db.selectFrom('task').select('id').where('subjectId', '=', (await referralOf(id)).id).where('doneAt', 'is', null).execute()).toEqual([])
  })

  it('without a value has nothing to report; its referral is closed with the reason, and the task with it', async () => {
    const id = await stopped({ measured: false })
    expect(await refusal(askTechnicalReport(c.technologist, { id }))).toBe('wrong-state')
    await closeStopped(c.technologist, { id, reason: 'No wish to repeat it; the physician was told.' })
    expect(await referralOf(id)).toMatchObject({ state: 'cancelled', stateReason: 'No wish to repeat it; the physician was told.' })
    expect(await stateOf(id)).toBe('stopped')
    expect(await t.db.selectFrom('task').select('id').where('kind', '=', 'study-stopped').where('subjectId', '=', (await referralOf(id)).id).where('doneAt', 'is', null).execute()).toEqual([])
  })

  it('nothing follows twice', async () => {
    const id = await stopped({ measured: true })
    await askTechnicalReport(c.technologist, { id })
    expect(await refusal(closeStopped(c.technologist, { id, reason: 'again' }))).toBe('wrong-state')
  })
})

describe('protocols of the organisation', async () => {
  const [first, ...rest] = protocols
  const propose = (body: unknown) => proposePolicy(c.neurologist, { name: 'protocols', siteId: null, body, note: 'radial side added', effectiveOn: '2026-12-02' })

  it('change by two people, and a study keeps the version that laid it out', async () => {
    t.clock.set('2026-12-02T09:00:00.000Z')
    const before = await c.started()
    const { id, version } = await propose({ protocols: [{ ...first!, runs: [{ technique: 'median-motor-apb', side: 'both' }] }, ...rest] })
    expect(await refusal(approvePolicy(c.neurologist, { id }))).toBe('not-allowed')
    await approvePolicy(c.director, { id })
    const after = await c.started()
    const laid = async (studyId: string) => (await c.study(studyId)).study.runs.map(run => `${run.side} ${run.technique}`)
    expect(await laid(after)).toEqual(['right median-motor-apb', 'left median-motor-apb'])
    await confirmStudy(c.technologist, { id: before, ...confirmed })
    expect(await laid(before)).toHaveLength(4)
    expect([(await viewStudy(c.technologist, before)).around.protocol?.version, (await viewStudy(c.technologist, after)).around.protocol?.version]).toEqual([0, version])
    await approvePolicy(c.director, await propose({ protocols }))
  })

  it.each([
    ['a technique that is not in the catalogue', [{ ...first!, runs: [{ technique: 'none', side: 'both' }] }], 'body.protocols.0.runs.0.technique'],
    ['the same run twice', [{ ...first!, runs: [first!.runs[0], first!.runs[0]] }], 'body.protocols.0.runs.1.technique'],
    ['the same question twice', [first, { ...first!, id: 'other' }], 'body.protocols.1.label'],
    ['a protocol without runs', [{ ...first!, runs: [] }], 'body.protocols.0.runs'],
    ['a protocol that rests on nothing', [{ ...first!, basis: '' }], 'body.protocols.0.basis'],
  ])('%s is refused at its place', async (_what, list, path) => {
    const error = await propose({ protocols: list }).catch((thrown: { options: { fields: { path: string }[] } }) => thrown)
    expect('options' in error ? error.options.fields.map(field => field.path) : []).toContain(path)
  })
})

describe('a second visit', () => {
  it('is confirmed anew, keeps the day of each run, and takes no temperature from last week', async () => {
    t.clock.set('2026-12-02T09:00:00.000Z')
    const id = await c.recording()
    expect(await refusal(startVisit(c.technologist, { id, reason: 'too tired', identifiers: ['name', 'birth-date'], cautionsRead: true }))).toBe('wrong-state')
    await addTemperature(c.technologist, { id, segment: 'hand', side: 'right', celsius: 34, method: 'skin probe', warmed: false })
    await c.type(id, 'median-motor-apb', 'right', [values])
    t.clock.set('2026-12-09T10:00:00.000Z')
    expect(await refusal(startVisit(c.technologist, { id, reason: 'too tired', identifiers: ['name', 'name'], cautionsRead: true }))).toBe('not-valid')
    await askCautions(c.technologist, { id, answers: { 'temporary-pacing-wire': 'yes' } })
    expect(await refusal(startVisit(c.technologist, { id, reason: 'too tired', identifiers: ['name', 'birth-date'], cautionsRead: true }))).toBe('not-valid')
    await askCautions(c.technologist, { id, answers: { 'temporary-pacing-wire': 'no' } })
    await startVisit(c.technologist, { id, reason: 'too tired', identifiers: ['name', 'birth-date'], cautionsRead: true })
    await c.type(id, 'ulnar-motor-adm', 'right', [values])
    const cold = async () => Object.fromEntries((await assessStoredStudy(t.context, id)).assessment.runs.map(run => [run.technique, run.cold.state]))
    expect(await cold()).toMatchObject({ 'median-motor-apb': 'warm', 'ulnar-motor-adm': 'unknown' })
    await addTemperature(c.technologist, { id, segment: 'hand', side: 'right', celsius: 29, method: 'skin probe', warmed: false })
    expect(await cold()).toMatchObject({ 'median-motor-apb': 'warm', 'ulnar-motor-adm': 'cold' })
    const { around, study } = await viewStudy(c.technologist, id)
    expect(around.visits).toMatchObject([{ day: '2026-12-09', reason: 'too tired' }])
    expect(study.runs.find(run => run.technique === 'ulnar-motor-adm')!.recordedAt).toBe('2026-12-09T10:00:00.000Z')
    expect(await reportText(id)).toMatch(/2 December 2026 and 9 December 2026/)
    t.clock.set('2026-12-02T09:00:00.000Z')
  })
})

it('values of two visits keep their days in the right record: no temperature of last week serves today', async () => {
  t.clock.set('2026-12-02T09:00:00.000Z')
  const id = await c.recording()
  const toReferralId = await c.booked({ patientId: (await t.makePatient({ birthDate: '1950-01-01' })).id })
  await addTemperature(c.technologist, { id, segment: 'hand', side: 'right', celsius: 34, method: 'skin probe', warmed: false })
  await c.type(id, 'median-motor-apb', 'right', [values])
  t.clock.set('2026-12-09T10:00:00.000Z')
  await startVisit(c.technologist, { id, reason: 'too tired', identifiers: ['name', 'birth-date'], cautionsRead: true })
  await c.type(id, 'ulnar-motor-adm', 'right', [values])
  const { studyId } = await moveStudy(c.technologist, { id, toReferralId, reason: 'The other patient of the same name lay there.' })
  const cold = Object.fromEntries((await assessStoredStudy(t.context, studyId)).assessment.runs.map(run => [run.technique, run.cold.state]))
  expect(cold).toMatchObject({ 'median-motor-apb': 'warm', 'ulnar-motor-adm': 'unknown' })
  expect((await viewStudy(c.technologist, studyId)).around.visits).toMatchObject([{ day: '2026-12-09' }])
  t.clock.set('2026-12-02T09:00:00.000Z')
})

describe('entered later from paper', () => {
  it('the study is of the day on which it was measured, by whom, entered by whom', async () => {
    t.clock.set('2026-12-02T09:00:00.000Z')
    const id = await c.recording()
    expect(await refusal(noteLaterEntry(c.technologist, { id, date: '2026-12-02', time: '23:00', measuredBy: 'Ida Brandt', reason: 'power cut' }))).toBe('not-valid')
    await noteLaterEntry(c.technologist, { id, date: '2026-11-30', time: '14:10', measuredBy: 'Ida Brandt', reason: 'power cut' })
    await c.type(id, 'median-motor-apb', 'right', [values])
    const { study, record } = await c.study(id)
    expect(record.studyDate).toBe('2026-11-30')
    expect(study.runs.find(run => run.technique === 'median-motor-apb')!.recordedAt).toBe(record.startedAt)
    expect((await viewStudy(c.neurologist, id)).around.laterEntry).toMatchObject({ measuredBy: 'Ida Brandt', reason: 'power cut', enteredByName: expect.any(String) })
    expect(await reportText(id)).toContain('by Ida Brandt, written on paper and entered later by')
  })
})

it('what is measured at a visit after a later entry is of that visit, not of the paper', async () => {
  t.clock.set('2026-12-02T09:00:00.000Z')
  const id = await c.recording()
  await noteLaterEntry(c.technologist, { id, date: '2026-11-30', time: '14:10', measuredBy: 'Ida Brandt', reason: 'power cut' })
  await c.type(id, 'median-motor-apb', 'right', [values])
  await startVisit(c.technologist, { id, reason: 'too tired', identifiers: ['name', 'birth-date'], cautionsRead: true })
  await c.type(id, 'ulnar-motor-adm', 'right', [values])
  const at = Object.fromEntries((await c.study(id)).study.runs.map(run => [run.technique, run.recordedAt?.slice(0, 10)]))
  expect(at).toMatchObject({ 'median-motor-apb': '2026-11-30', 'ulnar-motor-adm': '2026-12-02' })
})

describe('without a booking', async () => {
  const patientId = (await t.makePatient()).id
  const input = { siteId: c.site.id, patientId, clinicalQuestion: 'Wrist drop since this morning?', side: 'right' as const, protocol: 'carpal-tunnel', urgency: 'same-week' as const, urgencyReason: 'acute palsy', cautions: { 'cardiac-device': 'no' as const, 'temporary-pacing-wire': 'no' as const } }

  it('straight to the confirmation, with the runs of the protocol, and a task to complete the referral', async () => {
    const { studyId, referralId } = await walkIn(c.technologist, walkInSchema.parse(input))
    const { study, record } = await c.study(studyId!)
    expect(record.state).toBe('planned')
    expect(study.runs.map(run => run.side)).toEqual(['right', 'right', 'right', 'right'])
    expect((await referralOf(studyId!)).state).toBe('attended')
    expect((await t.db.selectFrom('task').select(['kind', 'sentence']).where('subjectId', '=', referralId).executeTakeFirst())?.sentence).toContain('enter its physician')
  })

  it('only put on the list, as arrived; two within a minute do not collide', async () => {
    const made = [await walkIn(c.technologist, walkInSchema.parse({ ...input, start: false })), (t.clock.advance(5), await walkIn(c.technologist, walkInSchema.parse({ ...input, start: false })))]
    const rows = await viewBenchDay(c.technologist, { siteId: c.site.id })
    expect(rows.filter(row => made.some(one => one.referralId === row.referralId)).map(row => [row.state, row.arrivedAt !== null])).toEqual([['arrived', true], ['arrived', true]])
  })

  it.each([
    ['urgent without a reason', { urgencyReason: '' }, 'urgencyReason'],
    ['cardiac device not asked', { cautions: { 'temporary-pacing-wire': 'no' } }, 'cautions.cardiac-device'],
    ['no side', { side: undefined }, 'side'],
  ])('%s is refused at its field', (_what, change, path) => {
    expect(walkInSchema.safeParse({ ...input, ...change }).error?.issues.map(issue => issue.path.join('.'))).toContain(path)
  })

  it('an arrival that was noted by mistake is taken back', async () => {
    const referralId = await c.booked()
    await noteArrival(c.technologist, { referralId })
    await undoArrival(c.technologist, { referralId })
    expect(await t.db.selectFrom('booking').select(['state', 'arrivedAt']).where('referralId', '=', referralId).executeTakeFirst()).toEqual({ state: 'booked', arrivedAt: null })
    expect(await refusal(undoArrival(c.technologist, { referralId }))).toBe('wrong-state')
    await startStudy(c.technologist, { referralId })
  })
})
