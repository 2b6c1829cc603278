import * as z from 'zod'
import { changedFields, changes, event, nothing } from './kind'

const size = z.object({ heightCm: z.number().nullable(), weightKg: z.number().nullable() })
const run = z.object({ runId: z.string(), technique: z.string(), side: z.string() })
const temperature = z.object({ temperatureId: z.string(), segment: z.string(), side: z.string(), celsius: z.number() })
const cell = z.object({ runId: z.string(), rowId: z.string(), field: z.string(), before: z.unknown(), after: z.unknown() })
const because = (reason: string) => reason ? `: ${reason}` : ''

/** Recording. Every earlier value of a cell stands here, and here only. */
export const benchEvents = {
  'study.started': event(z.object({ number: z.string() }), data => `started the study ${data.number}`),
  'study.confirmed': event(z.object({ identifiers: z.array(z.string()), side: z.string(), referralSide: z.string().nullable(), sideReason: z.string() }), data => `confirmed ${data.identifiers.join(' and ')}, the side ${data.side.toUpperCase()} and the cautions${data.side === data.referralSide ? '' : `; the referral says ${(data.referralSide ?? 'no side').toUpperCase()}`}`),
  'study.body-size-changed': event(z.object({ before: size, after: size }), () => 'changed height or weight'),
  'study.temperature-added': event(temperature.extend({ boundRuns: z.array(z.string()) }), data => `noted ${data.celsius.toFixed(1)} °C, ${data.side.toUpperCase()} ${data.segment}`),
  'study.temperature-removed': event(temperature, data => `removed the temperature ${data.celsius.toFixed(1)} °C, ${data.side.toUpperCase()} ${data.segment}`),
  'study.run-added': event(run, data => `added ${data.side.toUpperCase()} ${data.technique}`),
  'study.run-changed': event(z.object({ runId: z.string() }).extend(changes.shape), data => `changed a run: ${changedFields(data)}`),
  'study.run-removed': event(run.extend({ reason: z.string() }), data => `removed ${data.side.toUpperCase()} ${data.technique}${because(data.reason)}`),
  'study.row-added': event(z.object({ runId: z.string(), rowId: z.string(), site: z.string() }), data => `added the stimulation site ${data.site}`),
  'study.row-removed': event(z.object({ runId: z.string(), rowId: z.string(), site: z.string(), reason: z.string() }), data => `removed the stimulation site ${data.site}${because(data.reason)}`),
  'study.cells-saved': event(z.object({ cells: z.array(cell) }), data => `saved ${data.cells.length === 1 ? 'one value' : `${data.cells.length} values`}`),
  'study.check-kept': event(z.object({ key: z.string(), reason: z.string() }), () => 'kept a questioned value, with a reason'),
  'study.check-reopened': event(z.object({ key: z.string(), reason: z.string() }), () => 'took back the reason for a questioned value'),
  'study.handed-over': event(z.object({ flagged: z.number().int(), runs: z.number().int(), fingerprint: z.string() }), data => `handed over a study of ${data.runs} runs`),
  'study.stopped': event(nothing, () => 'stopped a study'),
  'report.ready-withdrawn': event(z.object({ studyId: z.string() }), () => 'a changed study took back "ready to sign"'),
}
