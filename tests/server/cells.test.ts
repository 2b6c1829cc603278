import { randomUUID } from 'node:crypto'
import { describe, expect, it } from 'vitest'
import { checkEntry } from '#server/services/check-entry'
import { saveCells } from '#server/services/save-cells'
import { moveState } from '#server/services/move-state'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { SaveCell } from '#shared/schemas/bench'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const id = await c.recording()
const by = c.technologist
const run = async (technique: string) => (await c.study(id)).study.runs.find(one => one.technique === technique)!
const motor = (await run('median-motor-apb')).rows[0]!.id
const save = async (...cells: (Partial<SaveCell> & Pick<SaveCell, 'field' | 'entry'>)[]) => (await saveCells(by, { id, cells: cells.map(cell => ({ saveId: randomUUID(), rowId: motor, revision: 0, ...cell })) })).cells
const saves = async () => (await eventNames(t, id)).filter(name => name === 'study.cells-saved').length

describe('saving cells', () => {
  it('a repeat with the same save id is answered as before and stored once', async () => {
    const cell = { saveId: randomUUID(), field: 'latencyMs', entry: 4.2, revision: 0 }
    const [first] = await save(cell)
    expect(first).toMatchObject({ saved: true, revision: 1 })
    t.clock.minutes(5)
    const [again] = await save(cell)
    expect(again).toEqual(first)
    expect(await saves()).toBe(1)
    const [next] = await save({ ...cell, saveId: randomUUID(), entry: 4.3, revision: 1 })
    expect(next).toMatchObject({ saved: true, revision: 2 })
    expect((await save(cell))[0]).toEqual(first)
    expect((await run('median-motor-apb')).rows[0]!.values.latencyMs).toBe(4.3)
  })
  it('an old revision is answered with what stands', async () => {
    const [answer] = await save({ field: 'latencyMs', entry: 9, revision: 1 })
    expect(answer).toMatchObject({ saved: false, because: 'changed-meanwhile', theirs: { entry: 4.3, revision: 2, by: c.technologistUser.name } })
  })
  it('an emptied cell is gone from the study and keeps its revision', async () => {
    await save({ field: 'durationMs', entry: 5.5 })
    expect((await save({ field: 'durationMs', entry: null, revision: 1 }))[0]).toMatchObject({ saved: true, revision: 2 })
    expect((await run('median-motor-apb')).rows[0]!.values).not.toHaveProperty('durationMs')
    expect((await c.study(id)).cellRevisions[`${motor}/durationMs`]).toBe(2)
    expect((await save({ field: 'durationMs', entry: 6, revision: 0 }))[0]).toMatchObject({ because: 'changed-meanwhile', theirs: { entry: null, revision: 2 } })
  })
  it('each cell of a batch stands for itself', async () => {
    const answers = await save({ field: 'amplitudeMv', entry: 6.8 }, { field: 'areaMvMs', entry: 999 }, { field: 'latencyMs', entry: 1, revision: 0 })
    expect(answers.map(answer => answer.saved ? 'saved' : answer.because)).toEqual(['saved', 'not-valid', 'changed-meanwhile'])
  })
  it('absences are values of their own', async () => {
    await save({ field: 'amplitudeMv', entry: 'no-response', revision: 1 })
    expect((await run('median-motor-apb')).rows[0]!.values.amplitudeMv).toBe('no-response')
  })
  it('the trail has every earlier value', async () => {
    const events = await t.db.selectFrom('auditEvent').select('dataJson').where('subjectId', '=', id).where('name', '=', 'study.cells-saved').orderBy('seq').execute()
    const latencies = events.flatMap(event => (JSON.parse(event.dataJson) as { cells: { field: string, before: unknown, after: unknown }[] }).cells).filter(cell => cell.field === 'latencyMs')
    expect(latencies.map(({ before, after }) => [before, after])).toEqual([[null, 4.2], [4.2, 4.3]])
  })
  it('a run knows when it was first recorded', async () => expect((await run('median-motor-apb')).recordedAt).toBe('2026-12-02T09:00:00.000Z'))
  it('a row of another study is not written', async () => {
    const other = await c.recording()
    const theirs = (await c.study(other)).study.runs[0]!.rows[0]!.id
    expect((await save({ rowId: theirs, field: 'latencyMs', entry: 4 }))[0]).toMatchObject({ saved: false, because: 'not-valid' })
    expect((await c.study(other)).study.runs[0]!.rows[0]!.values).toEqual({})
  })
  it('after hand-over a repeat is still answered, anything new is refused', async () => {
    const cell = { saveId: randomUUID(), field: 'stimulusMa', entry: 20, revision: 0 }
    const [first] = await save(cell)
    await t.db.transaction().execute(trx => moveState(by, trx, { subject: 'study', id, from: 'recording', to: 'handed-over' }))
    expect((await save(cell))[0]).toEqual(first)
    await expect(save({ ...cell, saveId: randomUUID(), entry: 21, revision: 1 })).rejects.toMatchObject({ code: 'wrong-state' })
  })
})

describe('what cannot be right', () => {
  it.each([
    { technique: 'median-motor-apb', site: 'wrist', field: 'latencyMs', entry: 4.25, says: null },
    { technique: 'median-motor-apb', site: 'wrist', field: 'latencyMs', entry: 0.29, says: 'Latency must be between 0.3 and 100 ms.' },
    { technique: 'median-motor-apb', site: 'wrist', field: 'latencyMs', entry: 420, says: 'Latency must be between 0.3 and 100 ms.' },
    { technique: 'median-motor-apb', site: 'wrist', field: 'latencyMs', entry: 4.255, says: 'Latency takes at most 2 decimals.' },
    { technique: 'median-motor-apb', site: 'wrist', field: 'amplitudeMv', entry: 0, says: 'Amplitude 0 is not a value. Enter "no response", "technical", "not done" or "stopped".' },
    { technique: 'median-motor-apb', site: 'wrist', field: 'amplitudeMv', entry: 'no-response', says: null },
    { technique: 'median-motor-apb', site: 'wrist', field: 'amplitudeMv', entry: 'many', says: 'Enter a number, or "no response", "technical", "not done" or "stopped".' },
    { technique: 'median-motor-apb', site: 'wrist', field: 'amplitudeUv', entry: 12, says: 'This column does not belong to the technique.' },
    { technique: 'median-motor-apb', site: 'elbow', field: 'distanceMm', entry: 215.5, says: 'Distance must be a whole number.' },
    { technique: 'median-motor-apb', site: 'elbow', field: 'distanceMm', entry: 700, says: 'Distance must be between 10 and 500 mm.' },
    { technique: 'median-sensory-d2', site: 'wrist', field: 'amplitudeUv', entry: 12.34, says: 'Amplitude takes at most 1 decimal.' },
    { technique: 'median-sensory-d2', site: 'wrist', field: 'amplitudeUv', entry: 1e-7, says: 'Amplitude must be between 0.1 and 300 µV.' },
    { technique: 'median-f-apb', site: 'wrist', field: 'series', entry: [27.1, 'no-response', 28.3], says: null },
    { technique: 'median-f-apb', site: 'wrist', field: 'series', entry: [27.1, 2830], says: 'Response 2: Minimum must be between 0.3 and 100 ms.' },
    { technique: 'median-f-apb', site: 'wrist', field: 'responseCount', entry: 0, says: null },
    { technique: 'median-motor-apb', site: 'wrist', field: 'series', entry: [1], says: 'This technique has no series.' },
    { technique: 'needle-apb', site: 'muscle', field: 'ordinal:fibrillations', entry: '2+', says: null },
    { technique: 'needle-apb', site: 'muscle', field: 'ordinal:fibrillations', entry: '9+', says: 'Choose the fibrillation potentials from the list.' },
    { technique: 'needle-apb', site: 'muscle', field: 'ordinal:unknown', entry: '1', says: 'This column does not belong to the technique.' },
    { technique: 'median-motor-apb', site: 'wrist', field: 'latencyMs', entry: null, says: null },
  ] as const)('$technique $field $entry: $says', ({ technique, site, field, entry, says }) => {
    expect(checkEntry(techniqueOf(technique)!, site, field, entry as SaveCell['entry'])).toBe(says)
  })
})
