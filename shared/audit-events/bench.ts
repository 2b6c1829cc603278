import * as z from 'zod'
import { changedFields, changes, event, nothing } from './kind'

const size = z.object({ heightCm: z.number().nullable(), weightKg: z.number().nullable() })
const run = z.object({ runId: z.string(), technique: z.string(), side: z.string() })
const temperature = z.object({ temperatureId: z.string(), segment: z.string(), side: z.string(), celsius: z.number() })
const cell = z.object({ runId: z.string(), rowId: z.string(), field: z.string(), before: z.unknown(), after: z.unknown() })
const question = z.object({ questionId: z.string(), runId: z.string().nullable() })
const because = (reason: string) => reason ? `: ${reason}` : ''

/** Recording. Every earlier value of a cell stands here, and here only. */
export const benchEvents = {
  'study.started': event(z.object({ number: z.string() }), data => `started the study ${data.number}`),
  'study.confirmed': event(z.object({ identifiers: z.array(z.string()), side: z.string(), referralSide: z.string().nullable(), sideReason: z.string() }), data => `confirmed ${data.identifiers.join(' and ')}, the side ${data.side.toUpperCase()} and the cautions${data.side === data.referralSide ? '' : `; the referral says ${(data.referralSide ?? 'no side').toUpperCase()}`}`),
  'study.cautions-asked': event(changes, data => `asked about cautions at the bench: ${changedFields(data)}`),
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
  'question.asked': event(question, () => 'asked the readers a question'),
  'question.seen': event(question, () => 'opened a question of the bench'),
  'question.answered': event(question.extend({ addedRunId: z.string().nullable() }), data => `answered a question of the bench${data.addedRunId ? ' and added a run' : ''}`),
  'question.withdrawn': event(question, () => 'took back a question'),
  'question.overdue': event(question, () => 'nobody answered a question of the bench in time'),
  'study.handed-over': event(z.object({ flagged: z.number().int(), runs: z.number().int(), fingerprint: z.string() }), data => `handed over a study of ${data.runs} runs`),
  'study.stopped': event(nothing, () => 'stopped a study'),
  'study.circumstances-saved': event(z.object({ room: z.string(), supervision: z.string().nullable(), supervisorId: z.string().nullable(), tolerance: z.string().nullable(), equipmentIds: z.array(z.string()) }), () => 'noted room, equipment and supervision of a study'),
  'study.comment-added': event(z.object({ commentId: z.string(), runId: z.string().nullable() }), () => 'commented on a study'),
  'study.visit-started': event(z.object({ visitId: z.string(), day: z.string(), identifiers: z.array(z.string()) }), data => `continued a study on ${data.day}, after confirming ${data.identifiers.join(' and ')}`),
  'study.later-entry': event(z.object({ measuredAt: z.string(), before: z.string().nullable() }), data => `noted that the values were measured at ${data.measuredAt} and entered later`),
  'study.moved-away': event(z.object({ toStudyId: z.string() }), () => 'a study was entered in error: its values belong to another record'),
  'study.moved-here': event(z.object({ fromStudyId: z.string(), runs: z.number().int() }), data => `took over the values of ${data.runs} runs that were recorded in another record`),
  'study.moved-checked': event(z.object({ fromStudyId: z.string() }), () => 'checked the values that came from another record'),
  'study.entered-in-error': event(nothing, () => 'a study was entered in error'),
  'study.report-asked': event(nothing, () => 'handed a stopped study over for a technical report'),
  'report.ready-withdrawn': event(z.object({ studyId: z.string() }), () => 'a changed study took back "ready to sign"'),
}
