import { describe, expect, it } from 'vitest'
import { absencesOf, awayOn, coveredOn } from '#server/database/queries/absences'
import { addAbsence, cancelAbsence, possibleCovers } from '#server/services/keep-absence'
import { testContext } from './helpers'

const t = await testContext()
const [here, there] = [await t.makeSite(), await t.makeSite()]
const person = async (name: string, role: 'neurologist' | 'technologist' | 'administrator', siteIds: string[]) => t.makeUser({ name, roles: siteIds.map(siteId => ({ siteId, role })) })
const away = await person('Ada Away', 'neurologist', [here.id])
const cover = await person('Cora Cover', 'neurologist', [here.id, there.id])
const elsewhere = await person('Elsa Elsewhere', 'neurologist', [there.id])
const technologist = await person('Theo Tech', 'technologist', [here.id])
const admin = await person('Abe Admin', 'administrator', [here.id])
const otherAdmin = await person('Olga Other', 'administrator', [there.id])
const days = { fromDay: '2026-12-04', toDay: '2026-12-07', coveredBy: cover.id }

describe('an absence', () => {
  it('is covered by people with the same role at the same site', async () => {
    expect((await possibleCovers(t.context, away.id)).map(one => one.name)).toEqual(['Cora Cover'])
  })
  it.each([
    { name: 'covers who reads elsewhere', input: { ...days, coveredBy: elsewhere.id }, path: 'coveredBy' },
    { name: 'covers who holds another role', input: { ...days, coveredBy: technologist.id }, path: 'coveredBy' },
    { name: 'the person covers for themself', input: { ...days, coveredBy: away.id }, path: 'coveredBy' },
    { name: 'it is over', input: { ...days, fromDay: '2026-11-01', toDay: '2026-12-01' }, path: 'toDay' },
  ])('is refused when $name', async ({ input, path }) => {
    await expect(addAbsence(t.as(away), away.id, input)).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path }] } })
  })
  it('is noted by the person or by an administrator of their sites, by nobody else', async () => {
    for (const other of [cover, otherAdmin, technologist]) await expect(addAbsence(t.as(other), away.id, days)).rejects.toMatchObject({ code: 'not-allowed' })
    const id = await addAbsence(t.as(admin), away.id, days)
    await expect(addAbsence(t.as(away), away.id, { ...days, fromDay: '2026-12-07', toDay: '2026-12-09' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'fromDay' }] } })
    await cancelAbsence(t.as(away), id)
    await expect(cancelAbsence(t.as(away), id)).rejects.toMatchObject({ code: 'not-found' })
    const events = await t.db.selectFrom('auditEvent').select(['name', 'subjectId']).where('name', 'like', 'absence.%').orderBy('seq').execute()
    expect(events).toEqual([{ name: 'absence.noted', subjectId: away.id }, { name: 'absence.cancelled', subjectId: away.id }])
  })
  it('counts from the first to the last day, both included', async () => {
    await addAbsence(t.as(away), away.id, days)
    const on = async (day: string) => [await coveredOn(t.db, cover.id, day), (await awayOn(t.db, [away.id, cover.id], day)).get(away.id)?.coveredByName]
    expect(await on('2026-12-03')).toEqual([[], undefined])
    expect(await on('2026-12-04')).toEqual([[away.id], 'Cora Cover'])
    expect(await on('2026-12-07')).toEqual([[away.id], 'Cora Cover'])
    expect(await on('2026-12-08')).toEqual([[], undefined])
    expect(await absencesOf(t.db, away.id, '2026-12-07')).toMatchObject([{ ...days, coveredByName: 'Cora Cover' }])
    expect(await absencesOf(t.db, away.id, '2026-12-08')).toEqual([])
  })
  it('is not covered by someone who is away too', async () => {
    await expect(addAbsence(t.as(cover), cover.id, { ...days, coveredBy: away.id })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'coveredBy', message: 'This person is away on some of these days. Choose someone else.' }] } })
  })
})
