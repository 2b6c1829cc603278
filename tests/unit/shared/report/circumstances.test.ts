import { expect, it } from 'vitest'
import { circumstanceSentences } from '#shared/report/circumstances'
import type { ReportBench } from '#shared/schemas/bench-day'
import { studySchema } from '#shared/schemas/study'
import { assessmentOf, runWith, snapshotOf } from '../../../fixtures/report-source'

const nothing: ReportBench = {
  circumstances: { room: '', supervision: null, supervisorId: null, supervisorName: '', equipment: [], tolerance: null, toleranceNote: '', told: '', revision: 0 },
  overdue: [], visits: [], laterEntry: null, move: null, stopped: null, protocol: null,
}
const { run, assessment } = runWith('r2', 'sural', 'left', [])
const study = studySchema.parse({ id: 's', studyDate: '2026-03-02', patient: { birthDate: '1974-03-14', sexForLimits: null }, runs: [{ ...run, recordedAt: '2026-03-09T09:00:00.000Z' }] })
const sentences = (bench: Partial<ReportBench> | undefined) => circumstanceSentences(snapshotOf(study, assessmentOf([assessment]), bench && { bench: { ...nothing, ...bench } }))

it.each<[string, Partial<ReportBench> | undefined, RegExp[]]>([
  ['a copy from before they were kept says nothing', undefined, []],
  ['nothing noted says nothing', {}, []],
  ['the protocol with its version', { protocol: { label: 'Carpal tunnel', version: 3 } }, [/^Protocol: Carpal tunnel, version 3\.$/]],
  ['the list that the program ships has no version of its own', { protocol: { label: 'Carpal tunnel', version: 0 } }, [/^Protocol: Carpal tunnel\.$/]],
  ['supervision, room and tolerance', { circumstances: { ...nothing.circumstances, room: 'Room 1', supervision: 'live-video', supervisorName: 'Dr Vale', tolerance: 'poorly', toleranceNote: 'tender' } }, [/^Supervision: live video, Dr Vale\.$/, /^Room: Room 1\.$/, /^Tolerated poorly, tender\.$/]],
  ['both days, and which runs are of the second', { visits: [{ day: '2026-03-09', startedAt: '2026-03-09T08:00:00.000Z', reason: 'too tired', technologistName: 'Ida Brandt' }] }, [/2 March 2026 and 9 March 2026/, /^On 9 March 2026 by Ida Brandt: LEFT .*sural.*Reason: too tired\.$/]],
  ['who measured on paper, and who entered it when', { laterEntry: { measuredAt: '2026-03-01T13:10:00.000Z', measuredBy: 'Ida Brandt', reason: 'power cut', enteredAt: '2026-03-02T08:00:00.000Z', enteredByName: 'Otto Lind' } }, [/^Measured on 1 March 2026, .* by Ida Brandt, written on paper and entered later by Otto Lind on 2 March 2026/]],
  ['why it was stopped', { stopped: { reason: 'felt faint.', at: '2026-03-02T08:00:00.000Z', byName: 'Ida Brandt' } }, [/^The study was stopped: felt faint\.$/]],
  ['values that came from another record', { move: { direction: 'from', studyId: 'x', number: 'NCS-2026-000004', reason: 'namesake', at: '2026-03-02T08:00:00.000Z', byName: 'Ida Brandt', checkedAt: '2026-03-02T09:00:00.000Z', checkedByName: 'Otto Lind' } }, [/another record \(NCS-2026-000004\).*checked again by Otto Lind/]],
])('%s', (_what, bench, expected) => {
  const said = sentences(bench)
  expect(said).toHaveLength(expected.length)
  for (const [index, pattern] of expected.entries()) expect(said[index]).toMatch(pattern)
})
