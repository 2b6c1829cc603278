import { expect, it } from 'vitest'
import { overdueSentences } from '#shared/equipment'

const device = { name: 'Machine 2', serial: 'A14', calibrationDue: null, safetyDue: null }

it.each([
  ['both dates unknown', {}, []],
  ['due today is not overdue', { calibrationDue: '2026-03-09' }, []],
  ['due yesterday', { calibrationDue: '2026-03-08' }, ['Machine 2 (A14): calibration was due on 8 March 2026.']],
  ['both overdue, without a serial number', { serial: '', calibrationDue: '2026-03-01', safetyDue: '2025-12-31' }, ['Machine 2: calibration was due on 1 March 2026.', 'Machine 2: the electrical-safety check was due on 31 December 2025.']],
])('%s', (_what, change, sentences) => {
  expect(overdueSentences({ ...device, ...change }, '2026-03-09')).toEqual(sentences)
})
