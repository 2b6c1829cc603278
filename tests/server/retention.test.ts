import { describe, expect, it } from 'vitest'
import { verifyAudit } from '#server/services/verify-audit'
import { liftLegalHold, listRetention, setLegalHold } from '#server/services/retention'
import { testContext } from './helpers'

/** Which records are past their years, children apart, and what keeps them all the same. */
const t = await testContext()
await t.makeSite()
const admin = t.as(await t.makeUser({ roles: ['administrator'] }))
const director = t.as(await t.makeUser({ roles: ['medical-director'] }))
const past = async () => (await listRetention(admin, { show: 'past', page: 1, pageSize: 100 })).rows
const record = async (birthDate: string, lastContact: string, state: 'answered' | 'received' = 'answered') => {
  const patient = await t.makePatient({ birthDate, createdAt: `${lastContact}T10:00:00.000Z` })
  await t.makeReferral({ patientId: patient.id, state, stateSince: `${lastContact}T10:00:00.000Z` })
  return patient.id
}

// Today is 2 December 2026; 10 years for adults, for children 10 years and never before the 30th birthday.
describe('a record', () => {
  it.each([
    ['of an adult, ten years to the day', '1950-01-01', '2016-12-02', '2026-12-02'],
    ['of an adult, a day short', '1950-01-01', '2016-12-03', null],
    ['of somebody who was 18 that day is an adult\'s', '1998-12-02', '2016-12-02', '2026-12-02'],
    ['of somebody who was 18 a day later is a child\'s', '1998-12-03', '2016-12-02', null],
    ['of a child past the 30th birthday', '1996-12-02', '2010-05-05', '2026-12-02'],
    ['of a child before it', '1996-12-03', '2010-05-05', null],
  ])('%s', async (_name, birthDate, lastContact, dueOn) => {
    const id = await record(birthDate, lastContact)
    expect((await past()).find(row => row.patientId === id)?.dueOn ?? null).toBe(dueOn)
  })
  it('with anything under way is not past its years', async () => {
    const id = await record('1950-01-01', '2010-01-01', 'received')
    expect((await past()).map(row => row.patientId)).not.toContain(id)
  })
  it('on hold is shown as such; another person lifts the hold', async () => {
    const patientId = await record('1950-01-01', '2010-01-01')
    const { id } = await setLegalHold(admin, { patientId, reason: 'Inquiry 12/2026' })
    await expect(setLegalHold(director, { patientId, reason: 'again' })).rejects.toMatchObject({ code: 'wrong-state' })
    expect((await past()).find(row => row.patientId === patientId)?.hold).toMatchObject({ reason: 'Inquiry 12/2026' })
    expect((await listRetention(admin, { show: 'held', page: 1, pageSize: 100 })).rows.map(row => row.patientId)).toEqual([patientId])
    await expect(liftLegalHold(admin, id)).rejects.toMatchObject({ code: 'not-allowed' })
    await liftLegalHold(director, id)
    expect((await listRetention(admin, { show: 'held', page: 1, pageSize: 100 })).total).toBe(0)
    expect((await verifyAudit(t.context)).acts.intact).toBe(true)
  })
})
