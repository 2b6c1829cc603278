import { expect, it } from 'vitest'
import { handOverStudy } from '#server/services/hand-over-study'
import { addRow } from '#server/services/save-row'
import { addRun, MOST_RUNS } from '#server/services/save-run'
import { addTemperature } from '#server/services/save-temperature'
import { viewStudy } from '#server/services/view-study'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const by = c.technologist

it(`a study has at most ${MOST_RUNS} runs, and says what to do then`, async () => {
  const id = await c.recording()
  const there = (await c.study(id)).study.runs.length
  for (let run = there; run < MOST_RUNS; run++) await addRun(by, { id, technique: 'needle-apb', side: 'right' })
  await expect(addRun(by, { id, technique: 'needle-apb', side: 'right' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'technique', message: expect.stringContaining('at most 80 runs. Take a blank run away') }] } })
  expect((await c.study(id)).study.runs).toHaveLength(MOST_RUNS)
})

it.each([
  ['ulnar-motor-adm', 'median-elbow'], ['median-motor-apb', 'ulnar-wrist'], ['fibular-motor-edb', 'lateral-malleolus'],
])('%s takes a row for %s, below the rows of its own nerve', async (technique, site) => {
  const id = await c.recording()
  await addRun(by, { id, technique, side: 'left' })
  const run = (await c.study(id)).study.runs.find(one => one.technique === technique && one.side === 'left')!
  await addRow(by, { id, runId: run.id, site })
  expect((await c.study(id)).study.runs.find(one => one.id === run.id)!.rows.at(-1)!.site).toBe(site)
})

it('short segments are declared by their technique', async () => {
  const id = await c.recording()
  const { runId } = await addRun(by, { id, technique: 'ulnar-motor-adm-short', side: 'right' })
  expect((await c.study(id)).study.runs.find(run => run.id === runId)).toMatchObject({ shortSegments: true, rows: { length: 5 } })
})

it('trains after exercise are repeated at several times', async () => {
  const id = await c.recording()
  const { runId } = await addRun(by, { id, technique: 'repetitive-ulnar-adm', side: 'right' })
  await addRow(by, { id, runId, site: 'after-exercise' })
  expect((await c.study(id)).study.runs.find(run => run.id === runId)!.rows.map(row => row.site)).toEqual(['rest', 'after-exercise', 'after-exercise'])
})

/** Shown faint beside the cells: what was measured before, where and when; of a run repeated warm the repeat. */
it('an earlier study of the same patient stands beside, with its day and site; another patient\'s and an unfinished one do not', async () => {
  const patient = await t.makePatient()
  const first = await c.recording({ patientId: patient.id })
  await addTemperature(by, { id: first, segment: 'hand', side: 'right', celsius: 33, method: 'skin probe', warmed: false })
  await c.type(first, 'median-motor-apb', 'right', [{ latencyMs: 5.2, amplitudeMv: 6.8, distanceMm: 80 }])
  for (const [technique, values] of [['median-sensory-d2', { onsetLatencyMs: 'no-response' }], ['ulnar-sensory-d5', { onsetLatencyMs: 2.7 }], ['ulnar-motor-adm', { latencyMs: 2.9 }]] as const) await c.type(first, technique, 'right', [values])
  const second = await c.recording({ patientId: patient.id })
  expect((await viewStudy(by, second)).earlier).toEqual({})
  await handOverStudy(by, { id: first, note: '' })
  const { earlier } = await viewStudy(by, second)
  expect(earlier['median-motor-apb/right']).toMatchObject({ studyId: first, siteName: c.site.name, rows: { wrist: { latencyMs: 5.2, amplitudeMv: 6.8, distanceMm: 80 } } })
  expect(earlier['median-sensory-d2/right']!.rows).toEqual({ wrist: { onsetLatencyMs: 'no-response' } })
  expect(earlier['median-motor-apb/left']).toBeUndefined()
  expect((await viewStudy(by, await c.recording())).earlier).toEqual({})
})

it('an earlier study of a site where the technologist has no role stays there', async () => {
  const other = await clinic(t)
  const patient = await t.makePatient()
  const first = await other.recording({ patientId: patient.id })
  for (const technique of ['median-motor-apb', 'median-sensory-d2', 'ulnar-sensory-d5', 'ulnar-motor-adm']) await other.type(first, technique, 'right', [{ [technique.includes('motor') ? 'latencyMs' : 'onsetLatencyMs']: 3 }])
  await handOverStudy(other.technologist, { id: first, note: '' })
  expect((await viewStudy(by, await c.recording({ patientId: patient.id }))).earlier).toEqual({})
})
