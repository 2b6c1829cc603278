import { describe, expect, it } from 'vitest'
import { acknowledgeDelivery } from '#server/services/acknowledge-delivery'
import { handOverStudy } from '#server/services/hand-over-study'
import { makeNewVersion } from '#server/services/make-new-version'
import { markReady, saveDraft } from '#server/services/save-draft'
import { signReport } from '#server/services/sign-report'
import { returnStudy, takeStudy } from '#server/services/take-study'
import { verifyReports } from '#server/services/verify-reports'
import { faultsOf } from '#server/services/verify-version'
import { viewReading } from '#server/services/view-reading'
import { viewReport } from '#server/services/view-report'
import { meanings } from '#shared/schemas/report'
import { reportBlocks } from '#shared/report/index'
import { sql } from 'kysely'
import { eventNames } from './bench-helpers'
import { testContext } from './helpers'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
const version = async (reportId: string, number = 1) => t.db.selectFrom('reportVersion').selectAll().where('reportId', '=', reportId).where('version', '=', number).executeTakeFirstOrThrow()
const deliveries = (reportId: string) => t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').selectAll('delivery').select('version').where('reportId', '=', reportId).orderBy('version').execute()

describe('the reading page', () => {
  it('shows the six flags of the study, its sentences and no open point once the text is there', async () => {
    const id = await room.written()
    const view = await viewReading(room.reader, id)
    expect(await room.flagged(id)).toHaveLength(6)
    expect(view.checks.filter(check => check.strength !== 'ok' && !check.resolvedBecause)).toEqual([])
    expect(view.findings.some(finding => finding.text.includes('5.2'))).toBe(true)
    expect(view).toMatchObject({ draftRevision: 1, readyToSign: false, versions: [] })
  })
  it('says what is missing while nothing is written', async () => {
    const view = await viewReading(room.reader, await room.handedOver())
    expect(view.checks.filter(check => check.strength === 'stop').map(check => check.key)).toEqual(['impression', 'correlation', 'limitations'])
    expect(view).toMatchObject({ draftRevision: 0, reportId: null })
  })
  it('two who write at once: the second is told, and gets the stored draft', async () => {
    const id = await room.written()
    await saveDraft(room.reader, { studyId: id, draft: finishedDraft({ recommendation: 'mine' }), revision: 1 })
    await expect(saveDraft(room.reader, { studyId: id, draft: finishedDraft({ recommendation: 'theirs' }), revision: 1 })).rejects.toMatchObject({ code: 'changed-meanwhile', options: { details: { revision: 2, draft: { recommendation: 'mine' } } } })
  })
  it('another reader takes the study over before writing', async () => {
    const id = await room.written()
    await expect(saveDraft(room.other, { studyId: id, draft: finishedDraft(), revision: 1 })).rejects.toMatchObject({ code: 'wrong-state' })
    await takeStudy(room.other, id)
    await expect(saveDraft(room.other, { studyId: id, draft: finishedDraft({ recommendation: 'Splint' }), revision: 1 })).resolves.toMatchObject({ revision: 2 })
    expect(await eventNames(t, id)).toContain('study.taken')
  })
  it('a value changed after a return makes the sentence anew, marks the edited one and takes "ready" back', async () => {
    const id = await room.written()
    const before = await viewReading(room.reader, id)
    const motor = before.findings.find(finding => finding.text.includes('5.2'))!
    const keptSentence = (await viewReading(room.reader, id)).findings.find(finding => finding.key === motor.key)!
    const { assessStoredStudy } = await import('#server/services/assess-stored-study')
    const fingerprint = (await assessStoredStudy(t.context, id)).assessment.findings.find(finding => finding.key === motor.key)!.fingerprint
    await saveDraft(room.reader, { studyId: id, draft: finishedDraft({ editedFindings: [{ key: motor.key, text: 'RIGHT median motor latency prolonged (5.2 ms).', fingerprint, left: false }] }), revision: 1 })
    expect(keptSentence.needsReview).toBe(false)
    expect((await markReady(room.reader, { studyId: id })).readyToSign).toBe(true)
    await returnStudy(room.reader, { id, question: 'Is 5.2 right?', runId: null })
    await room.type(id, 'median-motor-apb', 'right', [{ latencyMs: 4.2 }])
    await handOverStudy(room.technologist, { id, note: '' })
    const after = await viewReading(room.reader, id)
    expect(after.readyToSign).toBe(false)
    expect(after.findings.find(finding => finding.key === motor.key)).toMatchObject({ text: 'RIGHT median motor latency prolonged (5.2 ms).', edited: true, needsReview: true })
    expect(after.checks.find(check => check.key === `review/${motor.key}`)).toMatchObject({ strength: 'stop' })
    // Latency and motor difference are within now; the forearm velocity of 43 m/s is below 51.
    expect(await room.flagged(id)).toHaveLength(5)
    await expect(signReport(room.reader, { ...await room.lookedAt(id) })).rejects.toMatchObject({ code: 'not-ready' })
  })
})

describe('a signature (21 CFR 11.50, 11.70, 11.200: what the parts ask, in our own words)', () => {
  it('11.50(a): holds the printed name, the moment and the meaning', async () => {
    const { reportId } = await room.signed()
    expect(await version(reportId)).toMatchObject({ signedName: 'Rea Sample', signedCredentials: 'MD', signedAt: t.context.clock().toISOString(), meaning })
  })
  it('11.50(b): shows all three wherever the report is read', async () => {
    const { reportId } = await room.signed()
    const view = await viewReport(room.reader, { reportId })
    const blocks = reportBlocks({ ...view, preliminary: false, versions: view.versions }).find(part => part.id === 'signature')!
    const text = JSON.stringify(blocks)
    expect(text).toContain('Rea Sample, MD')
    expect(text).toContain('2 December 2026, 10:00 (+01:00)')
    expect(text).toContain(meaning)
    expect(text).toContain(view.sha256.slice(0, 4))
  })
  it('11.70: is bound to what was signed; a changed letter, name or time is found', async () => {
    const { reportId } = await room.signed()
    const row = await version(reportId)
    expect(faultsOf(row)).toEqual([])
    expect(faultsOf({ ...row, snapshotJson: row.snapshotJson.replace('Fits the history', 'Fits no history') })).toEqual(['the content does not fit its hash'])
    expect(faultsOf({ ...row, signedName: 'Somebody Else' })).toEqual(['the name of the signature was altered'])
    expect(faultsOf({ ...row, signedAt: '2026-12-03T00:00:00.000Z' })).toEqual(['the time of the signature was altered'])
  })
  it('11.70: the database refuses to change or remove it', async () => {
    const { reportId } = await room.signed()
    await expect(t.db.updateTable('reportVersion').set({ signedName: 'X' }).where('reportId', '=', reportId).execute()).rejects.toThrow('never altered')
    await expect(t.db.deleteFrom('reportVersion').where('reportId', '=', reportId).execute()).rejects.toThrow('never removed')
    await expect(sql`insert or replace into report_version select * from report_version where report_id = ${reportId}`.execute(t.db)).rejects.toThrow()
  })
  it('11.200(a): asks for the password again, and a wrong one signs nothing and is kept in the trail', async () => {
    const id = await room.written()
    await expect(signReport(room.reader, { ...await room.lookedAt(id), password: 'not this one at all' })).rejects.toMatchObject({ code: 'wrong-password' })
    expect((await viewReading(room.reader, id)).versions).toEqual([])
    expect(await eventNames(t, id)).toContain('report.not-signed')
  })
  it('11.200(a): nobody signs with the password of someone else', async () => {
    const id = await room.written()
    const stranger = t.as(await t.makeUser({ roles: [{ siteId: room.site.id, role: 'neurologist' }] }))
    await expect(signReport(stranger, await room.lookedAt(id))).rejects.toMatchObject({ code: 'wrong-password' })
  })
  it('names the drafter where a supervisor signs', async () => {
    const id = await room.written()
    const { reportId } = await signReport(room.other, await room.lookedAt(id))
    const { snapshot } = await viewReport(room.other, { reportId })
    expect(snapshot).toMatchObject({ draftedBy: 'Rea Sample, MD', signature: { name: 'Otto Sample' } })
  })
})

describe('signing', () => {
  it('moves everything at once: version, study, referral, audit, deliveries held for a minute, mail', async () => {
    const { reportId, studyId, version: number } = await room.signed()
    const study = await t.db.selectFrom('study').selectAll().where('id', '=', studyId).executeTakeFirstOrThrow()
    const referral = await t.db.selectFrom('referral').select('state').where('id', '=', study.referralId).executeTakeFirstOrThrow()
    expect([number, study.state, referral.state]).toEqual([1, 'read', 'answered'])
    const [delivery] = await deliveries(reportId)
    expect(delivery).toMatchObject({ state: 'held', method: 'encrypted-pdf', holdUntil: new Date(t.context.clock().getTime() + 60_000).toISOString() })
    const mail = await t.db.selectFrom('outboxMail').selectAll().where('deliveryId', '=', delivery!.id).executeTakeFirstOrThrow()
    expect(mail).toMatchObject({ state: 'held', template: 'report-ready', toAddress: delivery!.address })
    expect(mail.dataSealed).not.toContain('REP-')
    expect(await eventNames(t, reportId)).toEqual(['report.drafted', 'report.signed'])
  })
  it('freezes limits with set, version and row, the calculation version and the disclaimer', async () => {
    const { reportId } = await room.signed()
    const { snapshot } = await viewReport(room.reader, { reportId })
    const limits = snapshot.assessment.runs.flatMap(run => run.results).flatMap(result => 'limits' in result.verdict ? result.verdict.limits : [])
    expect(limits.length).toBeGreaterThan(10)
    expect(limits.every(limit => limit.setId === 'aanem-ndtf-2016' && limit.setVersion === 1 && limit.rowId !== '')).toBe(true)
    expect(snapshot.assessment.calculationVersion).toMatch(/\d/)
    expect(snapshot.organisation.disclaimer.length).toBeGreaterThan(20)
    expect(snapshot.techniques.map(technique => technique.id)).toContain('median-motor-apb')
  })
  it('of two who sign at once one wins and the other is told', async () => {
    const id = await room.written()
    const looked = await room.lookedAt(id)
    const results = await Promise.allSettled([signReport(room.reader, looked), signReport(room.other, looked)])
    expect(results.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
    expect(results.find(result => result.status === 'rejected')).toMatchObject({ reason: { code: 'already-signed' } })
    const report = await t.db.selectFrom('report').select('id').where('studyId', '=', id).executeTakeFirstOrThrow()
    expect((await eventNames(t, report.id)).filter(name => name === 'report.signed')).toHaveLength(1)
    expect(await deliveries(report.id)).toHaveLength(1)
  })
  it('a row or a draft changed since the look refuses, and stores nothing', async () => {
    const id = await room.written()
    const looked = await room.lookedAt(id)
    await saveDraft(room.reader, { studyId: id, draft: finishedDraft({ recommendation: 'Splint at night' }), revision: 1 })
    await expect(signReport(room.reader, looked)).rejects.toMatchObject({ code: 'changed-meanwhile' })
    const again = await room.lookedAt(id)
    await returnStudy(room.reader, { id, question: 'Check the distance', runId: null })
    await expect(signReport(room.reader, again)).rejects.toMatchObject({ code: 'wrong-state' })
    await room.type(id, 'median-motor-apb', 'right', [{ latencyMs: 5.1 }])
    await handOverStudy(room.technologist, { id, note: '' })
    await expect(signReport(room.reader, again)).rejects.toMatchObject({ code: 'changed-meanwhile' })
    expect((await viewReading(room.reader, id)).versions).toEqual([])
  })
  it('sign while returning: whichever came first stands, the other is refused', async () => {
    const id = await room.written()
    const looked = await room.lookedAt(id)
    const results = await Promise.allSettled([signReport(room.reader, looked), returnStudy(room.other, { id, question: 'One more site?', runId: null })])
    expect(results.filter(result => result.status === 'fulfilled')).toHaveLength(1)
  })
  it('an open point refuses with its list; a wrong side is answered with a reason that is printed', async () => {
    const wrong = finishedDraft({ impression: [{ id: 'line-1', words: 'LEFT median neuropathy at the wrist.', nerve: 'median', pattern: null, side: 'left', degree: null, abnormal: true }] })
    const id = await room.written(wrong)
    const view = await viewReading(room.reader, id)
    const [side] = view.checks.filter(check => check.key.startsWith('side/'))
    expect(side?.sentence).toContain('but on the RIGHT there is')
    await expect(signReport(room.reader, await room.lookedAt(id))).rejects.toMatchObject({ code: 'not-ready' })
    await saveDraft(room.reader, { studyId: id, draft: { ...wrong, resolved: [{ key: side!.key, about: side!.about, reason: 'Known from the last study' }] }, revision: 1 })
    const { reportId } = await signReport(room.reader, await room.lookedAt(id))
    const { snapshot } = await viewReport(room.reader, { reportId })
    expect(snapshot.resolvedChecks).toEqual([{ key: side!.key, sentence: side!.sentence, reason: 'Known from the last study' }])
  })
  it('a technical report is signed as such and only so', async () => {
    const id = await room.written({ technicalOnly: true, impression: [], correlation: '' })
    await expect(signReport(room.reader, await room.lookedAt(id))).rejects.toMatchObject({ code: 'not-valid' })
    const { reportId } = await signReport(room.reader, { ...await room.lookedAt(id), meaning: meanings[1] })
    const view = await viewReport(room.reader, { reportId })
    const text = JSON.stringify(reportBlocks({ ...view, preliminary: false }))
    expect(text).toContain('no clinical interpretation')
    expect(text).not.toContain('"Impression"')
  })
  it('whom mail cannot reach becomes a task, not a silence', async () => {
    const physician = await t.makePhysician({ emailVerifiedAt: null })
    const reason = 'They are telephoned'
    const id = await room.written({}, { physicianId: physician.id })
    const key = `recipient/${physician.name}`
    await saveDraft(room.reader, { studyId: id, draft: finishedDraft({ resolved: [{ key, reason }] }), revision: 1 })
    const { reportId } = await signReport(room.reader, await room.lookedAt(id))
    const [delivery] = await deliveries(reportId)
    expect(delivery).toMatchObject({ state: 'given-up', method: 'letter', stateReason: 'the address is not verified' })
    const task = await t.db.selectFrom('task').selectAll().where('subjectId', '=', delivery!.id).executeTakeFirstOrThrow()
    expect(task).toMatchObject({ kind: 'deliver-by-hand', ownerRole: 'administrator' })
  })
})

describe('later versions', () => {
  const next = (reportId: string, changes: object) => makeNewVersion(room.reader, { reportId, kind: 'corrected', reason: 'The side was wrong', password: PASSWORD, meaning, draft: finishedDraft(), ...changes })

  it('stand beside the first, say what changed, and go to everyone who had it', async () => {
    const { reportId } = await room.signed()
    const before = await version(reportId)
    const draft = finishedDraft({ correlation: 'Fits the history and the examination.' })
    expect(await next(reportId, { kind: 'amended', reason: 'More was known', draft })).toEqual({ reportId, version: 2 })
    expect(await version(reportId)).toEqual(before)
    const view = await viewReport(room.reader, { reportId })
    expect(view).toMatchObject({ version: 2, status: 'amended', superseded: false })
    expect(view.snapshot).toMatchObject({ supersedes: { version: 1, sha256: before.snapshotSha256 }, changes: [{ what: 'Clinical correlation', before: 'Fits the history.', after: 'Fits the history and the examination.' }] })
    expect((await viewReport(room.reader, { reportId, version: 1 })).superseded).toBe(true)
    const [first, second] = await deliveries(reportId)
    expect([first?.state, first?.stateReason, second?.state]).toEqual(['withdrawn', 'superseded by version 2', 'held'])
    expect(second?.physicianId).toBe(first?.physicianId)
  })
  it('an addition leaves what was signed as it is', async () => {
    const { reportId } = await room.signed()
    await expect(next(reportId, { kind: 'appended', draft: finishedDraft({ correlation: 'Something else.' }) })).rejects.toMatchObject({ code: 'not-valid' })
    await expect(next(reportId, { kind: 'appended', reason: 'Antibodies', draft: finishedDraft({ correlation: 'Fits the history. Antibodies were negative.' }) })).resolves.toMatchObject({ version: 2 })
  })
  it('entered in error withdraws results and text together, and ends the line', async () => {
    const { reportId, studyId } = await room.signed()
    await next(reportId, { kind: 'entered-in-error', reason: 'Another patient', draft: undefined })
    const view = await viewReport(room.reader, { reportId }).catch(error => error.code)
    const study = await t.db.selectFrom('study').select('state').where('id', '=', studyId).executeTakeFirstOrThrow()
    expect(study.state).toBe('entered-in-error')
    expect(view).toMatchObject({ status: 'entered-in-error' })
    const text = JSON.stringify(reportBlocks({ ...view, preliminary: false }))
    expect(text).toContain('entered in error and is withdrawn')
    expect(text).not.toContain('median neuropathy')
    expect(text).not.toContain('5.2')
    await expect(next(reportId, { kind: 'corrected' })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('a correction changes a value: the new version is computed from it, the old one keeps its own, the study follows', async () => {
    const { reportId, studyId } = await room.signed()
    const before = await version(reportId)
    const { study } = await room.study(studyId)
    const run = study.runs.find(each => each.technique === 'median-motor-apb' && each.side === 'right')!
    const [distal] = run.rows
    const corrections = [{ kind: 'cell', runId: run.id, rowId: distal!.id, field: 'latencyMs', entry: 3.9 }]
    await expect(next(reportId, { kind: 'amended', corrections })).rejects.toMatchObject({ code: 'not-valid' })
    await expect(next(reportId, { corrections: [{ ...corrections[0], entry: 900 }] })).rejects.toMatchObject({ options: { fields: [{ path: 'corrections[0]' }] } })
    await expect(next(reportId, { corrections: [{ kind: 'side', runId: 'of another study', side: 'left' }] })).rejects.toMatchObject({ options: { fields: [{ path: 'corrections[0]' }] } })
    expect((await version(reportId)).version).toBe(1)

    await next(reportId, { reason: 'The latency was read off the wrong trace', corrections })
    const { snapshot } = await viewReport(room.reader, { reportId })
    const latency = (view: typeof snapshot) => view.assessment.runs.find(each => each.runId === run.id)!.results.find(result => result.rowId === distal!.id && result.quantity === 'latencyMs')!
    expect(latency(snapshot)).toMatchObject({ print: '3.9', flagged: false })
    expect(snapshot.changes).toContainEqual({ what: expect.stringContaining('RIGHT median motor'), before: '5.2 ms', after: '3.9 ms' })
    expect(snapshot.findings.find(finding => finding.runIds.includes(run.id))?.text).not.toContain('5.2')
    const first = (await viewReport(room.reader, { reportId, version: 1 })).snapshot
    expect(latency(first)).toMatchObject({ print: '5.2', flagged: true })
    expect(await t.db.selectFrom('reportVersion').selectAll().where('reportId', '=', reportId).where('version', '=', 1).executeTakeFirstOrThrow()).toEqual(before)
    expect((await room.study(studyId)).study.runs).toEqual(snapshot.study.runs)
    const event = await t.db.selectFrom('auditEvent').selectAll().where('name', '=', 'study.values-corrected').where('subjectId', '=', studyId).executeTakeFirstOrThrow()
    expect(JSON.parse(event.dataJson)).toMatchObject({ changes: [{ field: 'latencyMs', before: 5.2, after: 3.9 }] })
    expect((await verifyReports(t.db)).altered).toEqual([])
  })
  it('a correction of a side is checked against the impression like any other', async () => {
    const { reportId, studyId } = await room.signed()
    const { study } = await room.study(studyId)
    const corrections = study.runs.filter(run => run.technique.startsWith('median')).map(run => ({ kind: 'side', runId: run.id, side: run.side === 'right' ? 'left' : 'right' }))
    await expect(next(reportId, { corrections })).rejects.toMatchObject({ code: 'not-ready' })
    const draft = finishedDraft()
    const [line, other] = draft.impression
    const turned = { ...draft, impression: [{ ...line!, words: 'Left median neuropathy at the wrist.', side: 'left' as const }, { ...other!, words: 'No evidence of the same on the right.', side: 'right' as const }] }
    await next(reportId, { reason: 'Right and left were exchanged at the bench', corrections, draft: turned })
    const { snapshot } = await viewReport(room.reader, { reportId })
    expect(snapshot.changes.filter(change => change.what === 'Side')).toHaveLength(corrections.length)
    expect(snapshot.assessment.runs.filter(run => run.results.some(result => result.flagged)).map(run => run.side)).toContain('left')
    expect((await room.study(studyId)).study.runs).toEqual(snapshot.study.runs)
  })
  it('a correction may take a run away that does not belong to the study', async () => {
    const { reportId, studyId } = await room.signed()
    const run = (await room.study(studyId)).study.runs.find(each => each.technique === 'ulnar-sensory-d5' && each.side === 'left')!
    await next(reportId, { reason: 'A run of the patient before', corrections: [{ kind: 'remove-run', runId: run.id }] })
    const { snapshot } = await viewReport(room.reader, { reportId })
    expect(snapshot.study.runs.map(each => each.id)).not.toContain(run.id)
    expect(snapshot.changes).toContainEqual({ what: 'Run', before: expect.stringContaining('LEFT ulnar sensory'), after: '' })
  })
  it('a report in the wrong record: entered in error there, its values moved to the right one, and everyone who had it is told', async () => {
    const { reportId, studyId } = await room.signed()
    const right = await room.booked()
    const own = (await room.study(studyId)).record.referralId
    await expect(next(reportId, { kind: 'entered-in-error', draft: undefined, rightReferralId: own })).rejects.toMatchObject({ code: 'not-valid' })
    expect((await version(reportId)).version).toBe(1)
    await next(reportId, { kind: 'entered-in-error', reason: 'Belongs to a namesake', draft: undefined, rightReferralId: right })
    expect((await room.study(studyId)).record.state).toBe('entered-in-error')
    const moved = await t.db.selectFrom('study').selectAll().where('referralId', '=', right).executeTakeFirstOrThrow()
    const values = (runs: { technique: string, side: string, rows: { values: object }[] }[]) => runs.map(run => [run.technique, run.side, run.rows.map(row => row.values)])
    const copied = values((await room.study(moved.id)).study.runs)
    for (const run of values((await room.study(studyId)).study.runs)) expect(copied).toContainEqual(run)
    expect((await deliveries(reportId)).map(delivery => delivery.state)).toEqual(['withdrawn', 'held'])
    const task = await t.db.selectFrom('task').selectAll().where('kind', '=', 'entered-in-error').where('subjectId', '=', own).executeTakeFirstOrThrow()
    expect(task.sentence).toContain('moved to the right record')
  })
  it('of two corrections at once one stands, and the other is told which version came between', async () => {
    const { reportId, studyId } = await room.signed()
    const run = (await room.study(studyId)).study.runs.find(each => each.technique === 'median-motor-apb' && each.side === 'right')!
    const to = (entry: number) => ({ replaces: 1, corrections: [{ kind: 'cell', runId: run.id, rowId: run.rows[0]!.id, field: 'latencyMs', entry }] })
    const results = await Promise.allSettled([next(reportId, to(5.3)), next(reportId, to(5.4))])
    expect(results.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
    expect(results.find(result => result.status === 'rejected')).toMatchObject({ reason: { code: 'changed-meanwhile' } })
    expect((await version(reportId)).version).toBe(1)
    expect((await viewReport(room.reader, { reportId })).version).toBe(2)
    expect((await room.study(studyId)).study.runs).toEqual((await viewReport(room.reader, { reportId })).snapshot.study.runs)
  })
  it('whoever is in training makes no later version either', async () => {
    const { reportId } = await room.signed()
    const trainee = { ...room.reader, actor: { ...room.reader.actor, inTraining: true } }
    await expect(makeNewVersion(trainee, { reportId, kind: 'appended', reason: 'More', password: PASSWORD, meaning, draft: finishedDraft({ recommendation: 'Splint.' }) })).rejects.toMatchObject({ code: 'not-allowed' })
  })
  it('asks for the password too', async () => {
    const { reportId } = await room.signed()
    await expect(next(reportId, { password: 'wrong one' })).rejects.toMatchObject({ code: 'wrong-password' })
  })
})

describe('verification', () => {
  it('names the version that was altered behind the program\'s back, and neither shows nor sends it', async () => {
    const { reportId } = await room.signed()
    expect((await verifyReports(t.db)).altered).toEqual([])
    await sql`drop trigger report_version_no_update`.execute(t.db)
    const row = await version(reportId)
    await t.db.updateTable('reportVersion').set({ snapshotJson: row.snapshotJson.replace('Right median', 'Left median') }).where('id', '=', row.id).execute()
    expect((await verifyReports(t.db)).altered).toMatchObject([{ reportId, version: 1, because: 'the content does not fit its hash' }])
    await expect(viewReport(room.reader, { reportId })).rejects.toMatchObject({ code: 'altered' })
    // Whoever mends the hash as well is found by the audit trail, which they cannot mend without the key.
    const { sha256Hex } = await import('#server/services/canonical-json')
    const forged = row.snapshotJson.replace('Right median', 'Left median')
    await t.db.updateTable('reportVersion').set({ snapshotSha256: sha256Hex(forged) }).where('id', '=', row.id).execute()
    expect((await verifyReports(t.db)).altered).toMatchObject([{ reportId, because: 'the audit trail holds another hash' }])
  })
  it('an unknown acknowledgement link says nothing', async () => {
    await expect(acknowledgeDelivery(t.context, { token: 'x'.repeat(43), address: '192.0.2.1' })).rejects.toMatchObject({ code: 'not-found' })
  })
})
