import { describe, expect, it } from 'vitest'
import { sql } from 'kysely'
import { approveAdoption, proposeAdoption } from '#server/services/adopt-set'
import { assessStoredStudy } from '#server/services/assess-stored-study'
import { importSet } from '#server/services/import-set'
import { longRead } from '#server/services/long-read'
import { whatIf, withSet } from '#server/services/long-reads/what-if'
import { referenceSet } from '#server/services/reference-sets'
import { listSets } from '#server/services/view-shelf'
import { referenceTable } from '#reference-tables/index'
import { ownSetColumns, ownSetExample, ownSetImportSchema } from '#shared/schemas/own-set'
import { readingRoom } from './reading-helpers'
import { testContext } from './helpers'

const t = await testContext()
const room = await readingRoom(t)
const secondDirector = t.as(await t.makeUser({ roles: [{ siteId: room.site.id, role: 'medical-director' }] }))
const head = { id: 'own-2026', title: 'Own limits 2026', citation: 'Measured in our own rooms, invented.', population: '120 invented people', technique: 'surface electrodes', lowerPercentile: 3, upperPercentile: 97, handMinimumC: 32, footMinimumC: 30, changeNote: 'First version.' }
const line = (changes: Partial<Record<(typeof ownSetColumns)[number], string>> = {}) => ({ technique: 'median-motor-apb', quantity: 'latencyMs', at: 'wrist', distance_mm: '80', unit: 'ms', bound: 'upper', value: '6.0', age_min: '18', age_max: '79', ...changes })
const csv = (lines: readonly Partial<Record<string, string>>[], separator = ',') => [ownSetColumns.join(separator), ...lines.map(each => ownSetColumns.map(column => each[column] ?? '').join(separator))].join('\r\n')
const input = (text: string, changes: object = {}) => ownSetImportSchema.parse({ format: 'csv', head, text, store: false, ...changes }) as Parameters<typeof importSet>[1]
const remarksOf = async (text: string, changes: object = {}) => (await importSet(room.director, input(text, changes))).remarks

describe('a file is checked line by line', () => {
  it.each<[string, Record<string, string>[], object[]]>([
    ['letters for a number', [line({ value: 'four' })], [{ strength: 'stop', row: 2, column: 'value', message: '"four" is no number. Enter the number alone, in the unit of its column.' }]],
    ['a value with its unit', [line(), line({ technique: 'ulnar-motor-adm', value: '3.7 ms' })], [{ strength: 'stop', row: 3, column: 'value' }]],
    ['another unit', [line({ unit: 's' })], [{ strength: 'stop', row: 2, column: 'unit', message: 'The unit of latency is ms, not "s". Nothing is converted.' }]],
    ['an unknown technique', [line({ technique: 'median' })], [{ strength: 'stop', row: 2, column: 'technique' }]],
    ['an unknown sex', [line({ sex: 'm' })], [{ strength: 'stop', row: 2, column: 'sex', message: '"m" is none of female, male.' }]],
    ['no bound', [line({ bound: '' })], [{ strength: 'stop', row: 2, column: 'bound', message: 'Enter upper or lower.' }]],
    ['no value', [line({ value: '' })], [{ strength: 'stop', row: 2, column: 'value', message: 'Enter the limit.' }]],
    ['a slip by ten', [line({ value: '440' })], [{ strength: 'stop', row: 2, column: 'value', message: '440 ms cannot be: latency lies between 0.3 and 100 ms. Is it the right unit?' }]],
    ['an overlap', [line(), line({ age_min: '60', age_max: '90', value: '6.5' })], [{ strength: 'stop', message: 'rows in line 2 and in line 3 would apply equally to median-motor-apb latencyMs.' }]],
    ['a gap', [line({ age_max: '39' }), line({ age_min: '50', value: '6.5' })], [{ strength: 'check', row: 3, column: 'age_min' }]],
    ['an odd value', [line({ value: '16' })], [{ strength: 'check', row: 2, column: 'value' }]],
  ])('%s', async (_name, lines, expected) => {
    const remarks = await remarksOf(csv(lines))
    for (const each of expected) expect(remarks).toContainEqual(expect.objectContaining(each))
  })
  it('the template itself is sound, with comma, semicolon and tab, and with a decimal comma', async () => {
    for (const separator of [',', ';', '\t']) expect(await remarksOf(csv(ownSetExample.map(each => ({ ...each, locator: 'own data' })), separator))).toEqual([])
    expect(await remarksOf(csv([line({ value: '6,0' })], ';'))).toEqual([])
  })
  it('a head that is not known, a broken line, an empty file', async () => {
    expect(await remarksOf('nerve,limit\nmedian,4')).toMatchObject([{ strength: 'stop', row: 1, message: expect.stringContaining('nerve, limit') }])
    expect(await remarksOf(`${ownSetColumns.join(',')}\na,b`)).toMatchObject([{ strength: 'stop' }])
    expect(await remarksOf(ownSetColumns.join(','))).toMatchObject([{ message: 'The file has no lines below its head.' }])
  })
  it('the name of a shipped set is taken', async () => {
    expect(await remarksOf(csv([line()]), { head: { ...head, id: 'india-adult' } })).toContainEqual(expect.objectContaining({ strength: 'stop', column: 'id' }))
  })
  it('nothing is stored by checking, by an error, or by a question that nobody looked at', async () => {
    await remarksOf(csv([line()]))
    await expect(importSet(room.director, input(csv([line({ value: 'x' })]), { store: true }))).rejects.toMatchObject({ code: 'not-valid' })
    await expect(importSet(room.director, input(csv([line({ value: '16' })]), { store: true }))).rejects.toMatchObject({ code: 'not-valid' })
    expect(await t.db.selectFrom('ownSet').selectAll().execute()).toEqual([])
  })
})

describe('an imported set', () => {
  const verdicts = async (studyId: string) => (await assessStoredStudy(t.context, studyId)).assessment.runs.find(run => run.technique === 'median-motor-apb' && run.side === 'right')!.results.find(result => result.label.includes('latency'))!.verdict

  it('judges studies from its first day on, after another person approved it, and no older one', async () => {
    const older = await room.handedOver()
    expect(await verdicts(older)).toMatchObject({ kind: 'outside' })
    const stored = await importSet(room.director, input(csv([line()]), { store: true }))
    expect(stored).toMatchObject({ stored: true, id: 'own-2026', version: 1, rows: 1 })
    expect(await verdicts(older)).toMatchObject({ kind: 'outside' })

    const inUse = await t.db.selectFrom('referenceAdoption').select('id').where('siteId', '=', room.site.id).execute()
    const { id } = await proposeAdoption(room.director, { siteId: room.site.id, setId: 'own-2026', setVersion: 1, techniques: null, effectiveOn: '2026-12-05' })
    await expect(approveAdoption(room.director, { id })).rejects.toMatchObject({ code: 'not-allowed' })
    await approveAdoption(secondDirector, { id })
    await t.db.updateTable('referenceAdoption').set({ endedOn: '2026-12-05' }).where('id', 'in', inUse.map(each => each.id)).execute()
    expect(await verdicts(older)).toMatchObject({ kind: 'outside' })
    const younger = await room.handedOver()
    await t.db.updateTable('study').set({ studyDate: '2026-12-05' }).where('id', '=', younger).execute()
    expect(await verdicts(younger)).toMatchObject({ kind: 'within', limits: [{ setId: 'own-2026', value: 6 }] })
    await t.db.updateTable('referenceAdoption').set({ endedOn: null }).where('id', 'in', inUse.map(each => each.id)).execute()
  })
  it('gets its next version under the same name; the former stays as it was', async () => {
    const stored = await importSet(room.director, input(csv([line({ value: '5.5' })]), { store: true, head: { ...head, changeNote: 'Measured again.' } }))
    expect(stored.version).toBe(2)
    expect((await referenceSet(t.db, 'own-2026', 1))!.rows[0]!.value).toBe(6)
    expect((await referenceSet(t.db, 'own-2026'))!.rows[0]!.value).toBe(5.5)
    expect((await listSets(room.director, [room.site.id])).filter(set => set.id === 'own-2026').map(set => [set.version, set.importedBy !== null])).toEqual([[2, true], [1, true]])
  })
  it('is never altered or removed', async () => {
    await expect(sql`update own_set set table_json = '{}'`.execute(t.db)).rejects.toThrow('never altered')
    await expect(sql`delete from own_set`.execute(t.db)).rejects.toThrow('never removed')
  })
  it('also comes as the JSON of a whole set', async () => {
    const raw = { ...structuredClone(referenceTable('india-adult')!), id: 'own-json' }
    const answer = await importSet(room.director, { format: 'json', text: JSON.stringify(raw), store: true, checksAccepted: true })
    expect(answer).toMatchObject({ stored: true, id: 'own-json', version: 1, rows: raw.rows.length })
    expect((await importSet(room.director, { format: 'json', text: '{}', store: false, checksAccepted: false })).remarks[0]).toMatchObject({ strength: 'stop', column: 'id' })
    expect((await importSet(room.director, { format: 'json', text: 'no', store: false, checksAccepted: false })).remarks).toMatchObject([{ message: 'The file is not JSON.' }])
  })
})

describe('what would change', () => {
  const today = '2026-12-02'
  it('lists the values that another set would judge otherwise, and stores nothing', async () => {
    const before = await t.db.selectFrom('auditEvent').select(eb => eb.fn.countAll().as('n')).executeTakeFirstOrThrow()
    const answer = await whatIf(t.db, { siteId: room.site.id, setId: 'own-2026', setVersion: 1, insteadOf: 'aanem-ndtf-2016', count: 50, today })
    expect(answer.studies).toBe(2)
    expect(answer.changes.filter(change => change.label.includes('latency') && change.after === 'within')).toMatchObject([{ print: '5.2 ms', before: 'above the limit', flagChanges: true }, { before: 'above the limit' }])
    expect(answer.changes.some(change => change.after === 'no limit')).toBe(true)
    expect(await t.db.selectFrom('auditEvent').select(eb => eb.fn.countAll().as('n')).executeTakeFirstOrThrow()).toEqual(before)
  })
  it('in a thread of its own, with the same answer', async () => {
    const asked = { siteId: room.site.id, setId: 'own-2026', setVersion: 1, insteadOf: null, count: 50, today }
    expect(await longRead(t.context, 'whatIf', asked)).toEqual(await whatIf(t.db, asked))
  }, 60_000)
  it('a set takes the place of another, or comes last', () => {
    const set = (setId: string, version = 1) => ({ setId, version, adoptedOn: '', adoptedBy: '', verifiedRows: [] })
    expect(withSet([set('a'), set('b')], set('c'), null).map(each => each.setId)).toEqual(['a', 'b', 'c'])
    expect(withSet([set('a'), set('b')], set('c'), 'a').map(each => each.setId)).toEqual(['c', 'b'])
    expect(withSet([set('a'), set('b')], set('b', 2), null).map(each => [each.setId, each.version])).toEqual([['a', 1], ['b', 2]])
  })
})
