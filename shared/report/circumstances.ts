import { overdueSentences } from '../equipment'
import { supervisionLabels, toleranceLabels, type ReportBench } from '../schemas/bench-day'
import type { ReportSnapshot } from '../schemas/report'
import { formatClock, formatDay, formatMoment } from './dates'

const joined = (parts: readonly (string | false | null | undefined)[], between = ', ') => parts.filter(Boolean).join(between)

function supervision({ circumstances }: ReportBench): string {
  const { supervision: mode, supervisorName } = circumstances
  if (!mode) return ''
  return `Supervision: ${joined([supervisionLabels[mode], supervisorName])}.`
}

function equipment({ circumstances }: ReportBench, day: string): string[] {
  const named = circumstances.equipment.map(({ name, serial }) => serial ? `${name} (${serial})` : name)
  const room = circumstances.room ? `Room: ${circumstances.room}. ` : ''
  return [`${room}${named.length ? `Equipment: ${named.join(', ')}.` : ''}`.trim(), ...circumstances.equipment.flatMap(each => overdueSentences(each, day))]
}

function tolerance({ circumstances }: ReportBench): string {
  if (!circumstances.tolerance) return ''
  return `Tolerated ${joined([toleranceLabels[circumstances.tolerance], circumstances.toleranceNote])}.`
}

/** Which runs are of which visit: the day stands at each run where there is more than one. */
function visits({ study, assessment, site }: ReportSnapshot, bench: ReportBench): string[] {
  if (bench.visits.length === 0) return []
  const days = [study.studyDate, ...bench.visits.map(visit => visit.day)].map(day => formatDay(day))
  const later = bench.visits.flatMap((visit, index) => {
    const until = bench.visits[index + 1]?.startedAt
    const titles = study.runs.filter(run => run.recordedAt && run.recordedAt >= visit.startedAt && (!until || run.recordedAt < until)).flatMap(run => assessment.runs.find(each => each.runId === run.id)?.title ?? [])
    return titles.length ? [`On ${formatDay(visit.day)}${visit.technologistName ? ` by ${visit.technologistName}` : ''}: ${titles.join('; ')}. Reason: ${visit.reason}.`] : []
  })
  return [`Recorded in ${days.length} visits, on ${days.join(' and ')} (clock of ${site.timeZone}); a run is of the first unless said otherwise.`, ...later]
}

function laterEntry({ laterEntry: entry }: ReportBench, timeZone: string): string {
  if (!entry) return ''
  return `Measured on ${formatDay(entry.measuredAt)}, ${formatClock(entry.measuredAt, timeZone)}, by ${entry.measuredBy}, written on paper and entered later by ${entry.enteredByName} on ${formatMoment(entry.enteredAt, timeZone)}; reason: ${entry.reason}.`
}

function moved({ move }: ReportBench, timeZone: string): string {
  if (!move || move.direction !== 'from') return ''
  return `The values were first entered under another record (${move.number}), moved on ${formatMoment(move.at, timeZone)} by ${move.byName} and checked again${move.checkedByName ? ` by ${move.checkedByName}` : ''}.`
}

/**
 * What the report says of room, equipment, supervision, tolerance, visits, later entry, and a study that was stopped.
 * Nothing where nothing was noted; a copy that was signed before these were kept says nothing either.
 */
export function circumstanceSentences(snapshot: ReportSnapshot): string[] {
  const { bench, site, study } = snapshot
  if (!bench) return []
  return [
    bench.protocol ? `Protocol: ${bench.protocol.label}${bench.protocol.version ? `, version ${bench.protocol.version}` : ''}.` : '',
    ...visits(snapshot, bench), laterEntry(bench, site.timeZone), moved(bench, site.timeZone),
    bench.stopped ? `The study was stopped: ${bench.stopped.reason.replace(/[.\s]+$/, '')}.` : '',
    supervision(bench), ...equipment(bench, study.studyDate), tolerance(bench),
  ].filter(Boolean)
}
