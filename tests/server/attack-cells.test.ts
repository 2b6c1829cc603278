import { expect, it } from 'vitest'
import { assessStoredStudy } from '#server/services/assess-stored-study'
import { keepCheck } from '#server/services/keep-check'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const by = c.technologist
const questions = async (id: string) => (await assessStoredStudy(t.context, id)).assessment.remarks.filter(remark => remark.strength === 'check')
const unusual = async (id: string, quantity: string) => (await questions(id)).find(remark => remark.code === 'unusual' && remark.quantity === quantity)

/** "Measured twice, same value" was said of the value that stood then, not of the next one. */
it('a questioned value that was kept is questioned again when it is corrected to another unlikely one', async () => {
  const id = await c.recording()
  await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 19.5, amplitudeMv: 6, distanceMm: 80 }])
  const { key } = (await unusual(id, 'latencyMs'))!
  await keepCheck(by, { id, key, reason: 'Measured twice, same value.' })
  await c.type(id, 'median-motor-apb', 'right', [{ amplitudeMv: 6.1 }])
  expect((await unusual(id, 'latencyMs'))!.kept).toBe('Measured twice, same value.')
  await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 91.5 }])
  const after = (await unusual(id, 'latencyMs'))!
  expect(after.key).toBe(key)
  expect(after.kept).toBeUndefined()
  expect((await eventNames(t, id)).slice(-2)).toEqual(['study.check-reopened', 'study.cells-saved'])
})

it('what was asked about a whole run is asked again when one of its values is corrected, not when one is added', async () => {
  const id = await c.recording()
  await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 4, amplitudeMv: 6, distanceMm: 80 }, { latencyMs: 6.4, amplitudeMv: 5.9, distanceMm: 215 }])
  const velocity = async () => (await questions(id)).find(remark => remark.code === 'velocity-unusual')
  await keepCheck(by, { id, key: (await velocity())!.key, reason: 'Tape laid again.' })
  await c.type(id, 'median-motor-apb', 'right', [{ durationMs: 5.5 }])
  expect((await velocity())!.kept).toBe('Tape laid again.')
  await c.type(id, 'median-motor-apb', 'right', [{ latencyMs: 4.1 }])
  expect((await velocity())!.kept).toBeUndefined()
})
