import { describe, expect, it } from 'vitest'
import { foldWords, patientWords } from '#server/database/queries/patient-words'
import { namesakesOf, searchPatients } from '#server/database/queries/patients'
import { addPatient, changePatient } from '#server/services/save-patient'
import { patientSchema } from '#shared/schemas/patient'
import { testContext } from './helpers'

const t = await testContext()
await t.makeSite()
const admin = t.as(await t.makeUser({ roles: ['administrator'] }))
const add = (familyName: string, givenName: string, birthDate: string, more: object = {}) => addPatient(admin, patientSchema.parse({ familyName, givenName, birthDate, ...more }))
const novakova = await add('Nováková', 'Jana', '1974-03-14', { identifier: 'AB 12-34' })
await add('Novák', 'Jan', '1980-09-03')
await add('Łukaszewicz', 'Bożena', '1966-11-30')
await add('O\'Neill', 'Siân', '1990-01-02')
await add('Straße-Weiß', 'Jörg', '1955-12-31')

describe('words', () => {
  it.each([
    { typed: 'Łukaszewicz-O\'Neill', folded: 'lukaszewicz oneill' },
    { typed: 'STRAßE  Weiß', folded: 'strasse weiss' },
    { typed: '"; DROP TABLE patient;--', folded: 'drop table patient' },
  ])('$typed folds to $folded', ({ typed, folded }) => expect(foldWords(typed)).toBe(folded))
  it.each([
    { typed: '1974-03-14', dates: ['1974-03-14'] },
    { typed: '14.3.1974', dates: ['1974-03-14'] },
    { typed: '14. 3. 1974', dates: ['1974-03-14'] },
    { typed: '14/03/1974', dates: ['1974-03-14'] },
    { typed: '03/14/1974', dates: ['1974-03-14'] },
    { typed: '3/9/1980', dates: ['1980-09-03', '1980-03-09'] },
    { typed: '14 March 1974', dates: ['1974-03-14'] },
    { typed: '14 mar 1974', dates: ['1974-03-14'] },
    { typed: '19740314', dates: ['1974-03-14'] },
    { typed: '31.2.1974', dates: [] },
  ])('$typed is read as $dates', ({ typed, dates }) => expect(patientWords(typed).birthDates).toEqual(dates))
})

describe('the register', () => {
  it.each([
    { search: 'novakova', found: ['Nováková'] },
    { search: 'NOVÁK', found: ['Novák', 'Nováková'] },
    { search: 'jana nov', found: ['Nováková'] },
    { search: 'lukasz', found: ['Łukaszewicz'] },
    { search: 'bozena', found: ['Łukaszewicz'] },
    { search: 'oneill', found: ['O\'Neill'] },
    { search: 'o\'neill', found: ['O\'Neill'] },
    { search: 'strasse', found: ['Straße-Weiß'] },
    { search: 'weiss jorg', found: ['Straße-Weiß'] },
    { search: 'P-000001', found: ['Nováková'] },
    { search: 'p000001', found: ['Nováková'] },
    { search: '12-34', found: ['Nováková'] },
    { search: '14.3.1974', found: ['Nováková'] },
    { search: 'jana 14 March 1974', found: ['Nováková'] },
    { search: 'jan 14 March 1974', found: ['Nováková'] },
    { search: '3/9/1980', found: ['Novák'] },
    { search: 'zzz', found: [] },
    { search: '" OR 1', found: [] },
    { search: '', found: ['Łukaszewicz', 'Novák', 'Nováková', 'O\'Neill', 'Straße-Weiß'] },
  ])('finds $found by "$search"', async ({ search, found }) => {
    const page = await searchPatients(t.db, { search, page: 1, pageSize: 50 })
    expect(page.rows.map(row => row.familyName).sort((a, b) => a.localeCompare(b))).toEqual(found.toSorted((a, b) => a.localeCompare(b)))
    expect(page.total).toBe(found.length)
  })
  it('pages', async () => {
    const page = await searchPatients(t.db, { search: '', page: 2, pageSize: 2 })
    expect(page).toMatchObject({ total: 5, page: 2, pageSize: 2 })
    expect(page.rows).toHaveLength(2)
  })
  it('finds a changed name by the new one and no longer by the old one', async () => {
    const made = await add('Before', 'Name', '1999-09-09')
    await changePatient(admin, { id: made.id, revision: 1, familyName: 'Afterwards' })
    expect((await searchPatients(t.db, { search: 'afterwards', page: 1, pageSize: 5 })).total).toBe(1)
    expect((await searchPatients(t.db, { search: 'before', page: 1, pageSize: 5 })).total).toBe(0)
  })
})

describe('namesakes', () => {
  it.each([
    { asked: ['Novakova', 'jana', '1974-03-14'], because: 'same name and birth date', strength: 'likely-same' },
    { asked: ['Jana', 'Nováková', '1974-03-14'], because: 'same birth date, family and given name swapped', strength: 'likely-same' },
    { asked: ['Novák', 'Jan', '1980-03-09'], because: 'same name, day and month of birth swapped', strength: 'likely-same' },
    { asked: ['Nováková', 'Jana', '1975-01-01'], because: 'same name, another birth date', strength: 'same-name' },
    { asked: ['Nováková', 'Jana', ''], because: 'same name', strength: 'same-name' },
    { asked: ['Dvořáková', 'Jana', '1974-03-14'], because: 'same birth date and given name', strength: 'same-birth-date' },
    { asked: ['Someone', 'Else', '1974-03-14'], because: 'same birth date', strength: 'same-birth-date' },
  ])('$asked: $because', async ({ asked: [familyName, givenName, birthDate], because, strength }) => {
    const found = await namesakesOf(t.db, { familyName: familyName!, givenName: givenName!, birthDate: birthDate! })
    expect(found.map(({ because, strength }) => ({ because, strength }))).toEqual([{ because, strength }])
  })
  it('leaves out the person asked about, and says nothing of a stranger', async () => {
    expect(await namesakesOf(t.db, { ...novakova, exceptId: novakova.id })).toEqual([])
    expect(await namesakesOf(t.db, { familyName: 'Nov', givenName: 'Jan', birthDate: '1901-01-01' })).toEqual([])
  })
})

describe('changing an entry', () => {
  it('keeps what stood before in the trail, and leaves out what was not sent', async () => {
    const made = await add('Kept', 'Gender', '1970-01-01', { gender: 'woman', phone: '1' })
    const changed = await changePatient(admin, { id: made.id, revision: 1, phone: '2' })
    expect(changed).toMatchObject({ gender: 'woman', phone: '2', revision: 2 })
    const event = await t.db.selectFrom('auditEvent').select('dataJson').where('subjectId', '=', made.id).where('name', '=', 'patient.changed').executeTakeFirstOrThrow()
    expect(JSON.parse(event.dataJson)).toEqual({ changes: [{ field: 'phone', before: '1' }] })
  })
  it('refuses an old revision and shows what stands', async () => {
    const made = await add('Two', 'Forms', '1970-01-02')
    await changePatient(admin, { id: made.id, revision: 1, phone: '111' })
    await expect(changePatient(admin, { id: made.id, revision: 1, phone: '222' })).rejects.toMatchObject({ code: 'changed-meanwhile', options: { details: { theirs: { phone: '111', revision: 2 } } } })
  })
  it.each([{ birthDate: '2026-12-03', says: 'Date of birth must not be after today.' }, { birthDate: '1874-03-14', says: 'Date of birth must be within the last 125 years.' }])('$birthDate: $says', async ({ birthDate, says }) => {
    await expect(add('Slip', 'Of Date', birthDate)).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'birthDate', message: says }] } })
  })
})
