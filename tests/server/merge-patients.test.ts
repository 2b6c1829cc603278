import { describe, expect, it } from 'vitest'
import { searchPatients } from '#server/database/queries/patients'
import { mergePatients, undoMerge } from '#server/services/merge-patients'
import { addOutsideStudy, removeOutsideStudy } from '#server/services/outside-studies'
import { startStudy } from '#server/services/start-study'
import { viewHistory } from '#server/services/view-history'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const administrator = t.as(await t.makeUser({ roles: [{ siteId: c.site.id, role: 'administrator' }] }))
const reason = 'Same person: she came with both letters.'
const owner = async (id: string) => (await t.db.selectFrom('referral').select('patientId').where('id', '=', id).executeTakeFirstOrThrow()).patientId
const pair = async (changes: object = {}) => [await t.makePatient({ familyName: 'Doubled' }), await t.makePatient({ familyName: 'Doubled', ...changes })] as const

describe('two records of one person', () => {
  it('are put together and taken apart again; what came in between stays', async () => {
    const [kept, merged] = await pair()
    const [first, second] = [await t.makeReferral({ patientId: kept.id, siteId: c.site.id }), await t.makeReferral({ patientId: merged.id, siteId: c.site.id })]
    const { mergeId } = await mergePatients(administrator, { keptId: kept.id, mergedId: merged.id, reason })
    expect([await owner(first.id), await owner(second.id)]).toEqual([kept.id, kept.id])
    expect((await searchPatients(t.db, { search: merged.recordNumber, page: 1, pageSize: 10 })).rows).toEqual([])
    expect((await viewHistory(administrator, merged.id)).mergedInto).toEqual({ id: kept.id, recordNumber: kept.recordNumber })
    expect((await viewHistory(administrator, kept.id)).merges).toMatchObject([{ mergedNumber: merged.recordNumber, reason }])
    const between = await t.makeReferral({ patientId: kept.id, siteId: c.site.id })

    await undoMerge(administrator, { mergeId, reason: 'Two sisters after all.' })
    expect([await owner(first.id), await owner(second.id), await owner(between.id)]).toEqual([kept.id, merged.id, kept.id])
    expect((await searchPatients(t.db, { search: merged.recordNumber, page: 1, pageSize: 10 })).rows).toHaveLength(1)
    await expect(undoMerge(administrator, { mergeId, reason: 'again, twice' })).rejects.toMatchObject({ code: 'wrong-state' })
    const events = await t.db.selectFrom('auditEvent').select(['name', 'patientId']).where('name', 'like', 'patient.merge%').orderBy('seq').execute()
    expect(events.map(event => [event.name, event.patientId])).toEqual([['patient.merged', kept.id], ['patient.merged', merged.id], ['patient.merge-undone', kept.id], ['patient.merge-undone', merged.id]])
  })
  it('a study moves with its referral, and a report that was ready has to be checked again', async () => {
    const studyId = await c.recording()
    const study = await t.db.selectFrom('study').select(['patientId', 'referralId']).where('id', '=', studyId).executeTakeFirstOrThrow()
    const before = await t.db.selectFrom('patient').selectAll().where('id', '=', study.patientId).executeTakeFirstOrThrow()
    const kept = await t.makePatient({ birthDate: before.birthDate, sexForLimits: before.sexForLimits })
    await mergePatients(administrator, { keptId: kept.id, mergedId: before.id, reason })
    expect(await t.db.selectFrom('study').select('patientId').where('id', '=', studyId).executeTakeFirstOrThrow()).toEqual({ patientId: kept.id })
  })
  it('are taken apart in the order in which they were put together, the last first', async () => {
    const [kept, merged] = await pair()
    const third = await t.makePatient({ familyName: 'Doubled' })
    const referral = await t.makeReferral({ patientId: merged.id, siteId: c.site.id })
    const first = await mergePatients(administrator, { keptId: kept.id, mergedId: merged.id, reason })
    const second = await mergePatients(administrator, { keptId: third.id, mergedId: kept.id, reason })
    await expect(undoMerge(administrator, { mergeId: first.mergeId, reason: 'Two sisters after all.' })).rejects.toMatchObject({ code: 'wrong-state' })
    expect(await owner(referral.id)).toBe(third.id)
    await undoMerge(administrator, { mergeId: second.mergeId, reason: 'Two sisters after all.' })
    await undoMerge(administrator, { mergeId: first.mergeId, reason: 'Two sisters after all.' })
    expect(await owner(referral.id)).toBe(merged.id)
  })
  it('a study begun in between goes back with its referral', async () => {
    const referralId = await c.booked()
    const { patientId } = await t.db.selectFrom('referral').select('patientId').where('id', '=', referralId).executeTakeFirstOrThrow()
    const before = await t.db.selectFrom('patient').selectAll().where('id', '=', patientId).executeTakeFirstOrThrow()
    const kept = await t.makePatient({ birthDate: before.birthDate, sexForLimits: before.sexForLimits })
    const { mergeId } = await mergePatients(administrator, { keptId: kept.id, mergedId: patientId, reason })
    const { studyId } = await startStudy(c.technologist, { referralId })
    await undoMerge(administrator, { mergeId, reason: 'Two sisters after all.' })
    expect(await owner(referralId)).toBe(patientId)
    expect(await t.db.selectFrom('study').select('patientId').where('id', '=', studyId).executeTakeFirstOrThrow()).toEqual({ patientId })
  })
  it.each([
    { what: 'another birth date', changes: { birthDate: '1974-04-13' }, words: 'dates of birth differ' },
    { what: 'another sex for limits', changes: { sexForLimits: 'male' as const }, words: 'sex for limits differs' },
  ])('are not put together with $what: limits would change unseen', async ({ changes, words }) => {
    const [kept, merged] = await pair(changes)
    await expect(mergePatients(administrator, { keptId: kept.id, mergedId: merged.id, reason })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'mergedId', message: expect.stringContaining(words) }] } })
  })
  it('a record is merged once, and never with itself', async () => {
    const [kept, merged] = await pair()
    await expect(mergePatients(administrator, { keptId: kept.id, mergedId: kept.id, reason })).rejects.toMatchObject({ code: 'not-valid' })
    await mergePatients(administrator, { keptId: kept.id, mergedId: merged.id, reason })
    await expect(mergePatients(administrator, { keptId: kept.id, mergedId: merged.id, reason })).rejects.toMatchObject({ code: 'wrong-state' })
  })
})

describe('a person across sites', () => {
  it('shows that something exists at another site, and neither question nor way there without a role', async () => {
    const patient = await t.makePatient()
    const elsewhere = await t.makeSite({ name: 'Elsewhere' })
    await t.makeReferral({ patientId: patient.id, siteId: elsewhere.id, clinicalQuestion: 'Hidden question' })
    await t.makeReferral({ patientId: patient.id, siteId: c.site.id, clinicalQuestion: 'Shown question' })
    const { lines } = await viewHistory(administrator, patient.id)
    expect(lines.map(line => [line.siteName, line.link !== null, line.question])).toEqual(expect.arrayContaining([['Elsewhere', false, ''], [c.site.name, true, 'Shown question']]))
  })
})

describe('a study from elsewhere', () => {
  const input = { performedOn: '2025-03-04', place: 'Another laboratory', summary: '', values: [{ technique: 'median-motor-apb', side: 'right' as const, quantity: 'latencyMs', at: 'wrist', value: 5.1 }], uploadId: null }
  it('is kept with its values and who entered it, and can be taken away', async () => {
    const patient = await t.makePatient()
    const { id } = await addOutsideStudy(administrator, { patientId: patient.id, ...input })
    expect((await viewHistory(administrator, patient.id)).outside).toMatchObject([{ id, place: 'Another laboratory', values: [{ value: 5.1 }], enteredBy: administrator.actor.label }])
    await removeOutsideStudy(administrator, { id })
    expect((await viewHistory(administrator, patient.id)).outside).toEqual([])
    await expect(removeOutsideStudy(administrator, { id })).rejects.toMatchObject({ code: 'not-found' })
  })
  it.each([
    { what: 'a value that cannot be', change: { values: [{ ...input.values[0]!, value: 510 }] }, path: 'values[0].value' },
    { what: 'an unknown nerve', change: { values: [{ ...input.values[0]!, technique: 'none' }] }, path: 'values[0].technique' },
    { what: 'a day to come', change: { performedOn: '2027-01-01' }, path: 'performedOn' },
    { what: 'a file of another patient', change: { uploadId: 'no-such-file' }, path: 'uploadId' },
  ])('is refused with $what', async ({ change, path }) => {
    const patient = await t.makePatient()
    await expect(addOutsideStudy(administrator, { patientId: patient.id, ...input, ...change })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path }] } })
  })
})
