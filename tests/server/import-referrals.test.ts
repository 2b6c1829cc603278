import { describe, expect, it } from 'vitest'
import { csvLines } from '#server/services/csv-lines'
import { importReferrals } from '#server/services/import-referrals'
import { referralImportSchema } from '#shared/schemas/referral-import'
import { testContext } from './helpers'

const t = await testContext()
const site = await t.makeSite()
const administrator = t.as(await t.makeUser({ roles: [{ siteId: site.id, role: 'administrator' }] }))
const physician = await t.makePhysician({ email: 'vera@practice.example' })
const head = 'Family name,Given name,Birth date,Sex for limits,Physician email,Clinical question,Side,Urgency'
const file = (...lines: string[]) => [head, ...lines].join('\n')
const run = (text: string, changes: object = {}) => importReferrals(administrator, referralImportSchema.parse({ siteId: site.id, text, store: false, ...changes }))
const counts = async () => [await t.db.selectFrom('patient').select('id').execute(), await t.db.selectFrom('referral').select('id').execute()].map(rows => rows.length)

describe('a file of referrals', () => {
  it('is read by the names of its columns, and each line says what will happen', async () => {
    const known = await t.makePatient({ familyName: 'Nováková', givenName: 'Jana', birthDate: '1974-03-14' })
    const answer = await run(file('Novakova,Jana,1974-03-14,female,vera@practice.example,Median nerve?,right,urgent', 'Other,Ola,1980-01-02,,,,,'))
    expect(answer.mapping).toMatchObject({ familyName: 'family name', birthDate: 'birth date', physicianEmail: 'physician email' })
    expect(answer.lines).toMatchObject([{ line: 2, patientWill: 'known record', recordNumber: known.recordNumber, errors: [] }, { line: 3, patientWill: 'new record', recordNumber: null, errors: [] }])
    expect(answer.stored).toBe(0)
  })
  it.each([
    ['no birth date', 'Abel,Ann,,,,,,', 'birthDate', 'It is missing.'],
    ['a birth date in another order', 'Abel,Ann,03/09/74,,,,,', 'birthDate', 'Enter the date as year-month-day, for example 2026-03-09.'],
    ['a letter for the sex', 'Abel,Ann,1980-01-02,f,,,,', 'sexForLimits', 'Enter female or male, or leave it blank.'],
    ['an unknown side', 'Abel,Ann,1980-01-02,,,,R,', 'side', 'Enter right, left, both or midline, or leave it blank.'],
    ['an unknown urgency', 'Abel,Ann,1980-01-02,,,,,soon', 'urgency', 'Enter routine, urgent or same-week, or leave it blank.'],
    ['an unknown physician', 'Abel,Ann,1980-01-02,,nobody@practice.example,,,', 'physicianEmail', 'Nobody in the directory has this address.'],
  ])('stops at %s', async (_what, line, field, message) => {
    const [shown] = (await run(file(line))).lines
    expect(shown).toMatchObject({ patientWill: 'stopped', errors: [{ field, message }] })
  })
  it('the same new person twice in one file stops, and a namesake is named and not taken', async () => {
    await t.makePatient({ familyName: 'Berg', givenName: 'Bo', birthDate: '1960-05-06' })
    const { lines } = await run(file('Berg,Bo,1990-05-06,,,,,', 'Cole,Cy,1991-01-01,,,,,', 'cole,Cy,1991-01-01,,,,,'))
    expect(lines[0]).toMatchObject({ patientWill: 'new record', notes: [expect.stringContaining('same name, another birth date')] })
    expect(lines[2]!.errors[0]!.message).toContain('line 3')
  })
  it('two records that fit stop: a person decides', async () => {
    for (let n = 0; n < 2; n++) await t.makePatient({ familyName: 'Twice', givenName: 'Tom', birthDate: '1970-01-01' })
    expect((await run(file('Twice,Tom,1970-01-01,,,,,'))).lines[0]!.errors[0]!.message).toContain('Two records fit')
  })
  it('nothing is half imported', async () => {
    const before = await counts()
    await expect(run(file('Good,Gail,1980-01-02,,,,,', 'Bad,Ben,,,,,,'), { store: true })).rejects.toMatchObject({ code: 'not-valid' })
    expect(await counts()).toEqual(before)
  })
  it('is stored whole, as received, under the physician of the directory', async () => {
    const answer = await run(file('Dorn,Dana,1981-02-03,female,VERA@practice.example,Ulnar nerve at the elbow?,left,routine', 'Elm,Eli,1982-03-04,male,,,,'), { store: true })
    expect(answer.stored).toBe(2)
    const rows = await t.db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').select(['familyName', 'state', 'side', 'physicianId', 'clinicalQuestion', 'receivedAt']).where('familyName', 'in', ['Dorn', 'Elm']).orderBy('familyName').execute()
    expect(rows).toMatchObject([{ familyName: 'Dorn', state: 'received', side: 'left', physicianId: physician.id, clinicalQuestion: 'Ulnar nerve at the elbow?' }, { familyName: 'Elm', state: 'received', side: null, physicianId: null }])
    expect(rows.every(row => row.receivedAt !== null)).toBe(true)
  })
  it('columns of other names are chosen by hand', async () => {
    const answer = await run('Nachname;Vorname;geboren\nFink;Fay;1979-09-09', { mapping: { familyName: 'Nachname', givenName: 'Vorname', birthDate: 'geboren' } })
    expect(answer.lines).toMatchObject([{ patient: 'Fink, Fay, born 1979-09-09', errors: [] }])
  })
  it('a broken file says where', async () => {
    await expect(run('a,b\n1')).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'text', message: expect.stringContaining('line 2') }] } })
    expect(csvLines('a;b\n1;2,5')).toEqual({ columns: ['a', 'b'], records: [{ a: '1', b: '2,5' }] })
  })
})
