/**
 * What a manager watches, with the exact definition that stands beside each figure and goes into every export. An
 * indicator is a list of cases; each case belongs to a site and, by its moment, to a month of that site's calendar.
 * The figures themselves are common practice of service management; the definitions are this program's own.
 *
 * share: cases that count out of all cases. times: median and 90th centile of the cases' hours. count: how many cases.
 */
export type IndicatorKind = 'share' | 'times' | 'count' | 'per-day'

export interface Indicator {
  label: string
  kind: IndicatorKind
  definition: string
  /** What the figure can and cannot say. */
  note: string
  /** How the cases can be broken down: key of `IndicatorCase.groups` to its words. */
  groups: Readonly<Record<string, string>>
}

export const indicators = {
  'wait': {
    label: 'Referral to appointment', kind: 'times', groups: { urgency: 'Urgency' },
    definition: 'Hours from the moment the referral was last received complete before its first booking to the start of the first appointment offered. Month: the day the first booking was made. Referrals never booked are no case.',
    note: 'Read urgent referrals separately.',
  },
  'returned': {
    label: 'Returned for information', kind: 'share', groups: { practice: 'Practice', reason: 'Reason' },
    definition: 'Referrals that were returned for information at least once, out of all that were received. Month: the day of first receipt.',
    note: 'A practice far above the others may need another form, not another letter.',
  },
  'no-show': {
    label: 'Did not attend', kind: 'share', groups: { lead: 'Lead time' },
    definition: 'Bookings marked "did not attend", out of all bookings that were kept or missed. Cancelled and moved bookings are no case. Month: the day of the appointment. Lead time: from making the booking to its start.',
    note: 'Lead time is the strongest known influence.',
  },
  'temperature': {
    label: 'Temperature recorded', kind: 'share', groups: {},
    definition: 'Studies in which every limb segment with a recorded nerve run has at least one temperature, out of all studies handed over. Needle and face runs need none. Month: the day of the last hand-over.',
    note: 'The aim is 98 % or more.',
  },
  'cold-repeat': {
    label: 'Repeated after warming', kind: 'share', groups: {},
    definition: 'Studies with at least one run that repeats another one, out of all studies handed over. Month: the day of the last hand-over.',
    note: 'Compare a site with itself over the months and the season.',
  },
  'repeat-visit': {
    label: 'Second visit', kind: 'share', groups: {},
    definition: 'Studies begun within 90 days after another study of the same patient that was stopped, out of all studies begun. Month: the day of the study.',
    note: 'Visits that a physician asked for anew count too when the earlier study was stopped.',
  },
  'abnormal': {
    label: 'With a value outside limits', kind: 'share', groups: {},
    definition: 'Studies with at least one value outside its limit at hand-over, out of all studies signed. Month: the day of the first signature.',
    note: 'Shows drift of a site against its own history. It is no ranking: sites see different patients.',
  },
  'sign': {
    label: 'Handed over to signed', kind: 'times', groups: { urgency: 'Urgency' },
    definition: 'Hours from the last hand-over by the technologist to the first signature. Month: the day of the first signature.',
    note: '',
  },
  'deliver': {
    label: 'Signed to sent', kind: 'times', groups: { method: 'Way' },
    definition: 'Hours from the signature of a version to the moment its delivery was accepted by the mail server or recorded by hand. One case per version and recipient. Month: the day of the signature.',
    note: 'The hold of one minute is part of it.',
  },
  'acknowledge': {
    label: 'Sent to acknowledged', kind: 'times', groups: { method: 'Way' },
    definition: 'Hours from sending to the acknowledgement of receipt. Deliveries that nobody acknowledged are no case here; see "Not acknowledged". Month: the day of sending.',
    note: '',
  },
  'unsigned': {
    label: 'Waiting for signature now', kind: 'count', groups: { age: 'Waiting' },
    definition: 'Studies handed over and not signed at this moment, by how long they wait since the last hand-over. Month: the day of the hand-over.',
    note: 'Goes to the reader, then to the medical director, by the policy "Clocks".',
  },
  'later-version': {
    label: 'Later versions', kind: 'share', groups: { status: 'Kind' },
    definition: 'Reports with a later version (appended, amended, corrected, entered in error), out of all reports signed for the first time. Month: the day of the first signature.',
    note: 'Amended, corrected and entered in error change what was said; appended adds to it.',
  },
  'told-again': {
    label: 'Told of a later version in a day', kind: 'share', groups: {},
    definition: 'Recipients of an earlier version to whom the later version was sent within 24 hours of its signature, out of all recipients of the earlier version. Month: the day of the later signature.',
    note: 'The aim is 100 %.',
  },
  'not-acknowledged': {
    label: 'Not acknowledged in 7 days', kind: 'share', groups: { practice: 'Practice' },
    definition: 'Deliveries that were not acknowledged within 7 days, out of all deliveries sent at least 7 days ago. Withdrawn ones are no case. Month: the day of sending.',
    note: 'Telephone.',
  },
  'withdrawn': {
    label: 'Withdrawn after sending', kind: 'count', groups: { acknowledged: 'Opened' },
    definition: 'Deliveries withdrawn after they had been sent. Month: the day of withdrawal. The incident record of each says who got it and whether it was opened.',
    note: 'Each one is looked into.',
  },
  'kept-check': {
    label: 'Checks kept with a reason', kind: 'share', groups: { check: 'Check' },
    definition: 'Checks that were kept with a reason, out of all checks that stood at hand-over, by check. A value that was corrected after its check asked is no case. Month: the day of the last hand-over.',
    note: 'A check that is nearly always kept asks too often and should be changed.',
  },
  'output': {
    label: 'Studies per technologist and day', kind: 'per-day', groups: {},
    definition: 'Studies handed over, divided by the days on which each technologist handed over at least one. Month: the day of the last hand-over.',
    note: 'Says nothing without the kind of studies; no ranking of people.',
  },
} as const satisfies Record<string, Indicator>

export type IndicatorId = keyof typeof indicators
export const indicatorIds = Object.keys(indicators) as [IndicatorId, ...IndicatorId[]]

/** One thing that makes up an indicator, with its own number and no patient's name. */
export interface IndicatorCase {
  siteId: string
  /** The moment that decides the month. */
  at: string
  subject: 'referral' | 'study' | 'report'
  subjectId: string
  number: string
  /** share: whether it counts. */
  counts?: boolean
  /** times: how long it took. */
  hours?: number
  /** per-day: the person whose day it was. */
  personId?: string
  groups: Readonly<Record<string, string>>
}

/** A figure of one site and month; `cases` is the whole it is taken from. */
export interface Figure { cases: number, counted: number, medianHours: number | null, ninetiethHours: number | null, perDay: number | null }

/**
 * The figure of some cases. The 90th centile and the median are of the nearest rank: the smallest value that at least
 * 90 % (50 %) of the cases do not exceed. Source: common practice (nearest-rank definition).
 *
 * @example
 * figureOf('times', [{ hours: 2 }, { hours: 4 }, { hours: 30 }]) // => { cases: 3, medianHours: 4, ninetiethHours: 30, … }
 */
export function figureOf(kind: IndicatorKind, cases: readonly Pick<IndicatorCase, 'counts' | 'hours' | 'personId' | 'at'>[], dayOf: (at: string) => string = at => at.slice(0, 10)): Figure {
  const hours = kind === 'times' ? cases.flatMap(one => one.hours ?? []).sort((a, b) => a - b) : []
  const personDays = kind === 'per-day' ? new Set(cases.map(one => `${one.personId ?? ''} ${dayOf(one.at)}`)).size : 0
  return {
    cases: cases.length,
    counted: kind === 'share' ? cases.filter(one => one.counts).length : cases.length,
    medianHours: nearestRank(hours, 0.5),
    ninetiethHours: nearestRank(hours, 0.9),
    perDay: personDays > 0 ? cases.length / personDays : null,
  }
}

function nearestRank(sorted: readonly number[], share: number): number | null {
  return sorted.length === 0 ? null : sorted[Math.max(0, Math.ceil(share * sorted.length - 1e-9) - 1)] ?? null
}

/**
 * A figure in words for a table's cell.
 * @example figureWords('share', { cases: 40, counted: 3, … }) // => '7.5 % (3 of 40)'
 */
export function figureWords(kind: IndicatorKind, figure: Figure): string {
  if (kind === 'count') return String(figure.cases)
  if (figure.cases === 0) return 'none'
  if (kind === 'share') return `${(100 * figure.counted / figure.cases).toFixed(1)} % (${figure.counted} of ${figure.cases})`
  if (kind === 'per-day') return figure.perDay === null ? 'none' : `${figure.perDay.toFixed(1)} (${figure.cases} studies)`
  return figure.medianHours === null ? 'none' : `${hoursWords(figure.medianHours)}, 90 % within ${hoursWords(figure.ninetiethHours ?? figure.medianHours)} (${figure.cases})`
}

/** @example hoursWords(30) // => '30 h'; hoursWords(96) // => '4.0 days' */
export function hoursWords(hours: number): string {
  if (hours < 1) return `${Math.round(hours * 60)} min`
  return hours < 72 ? `${Math.round(hours)} h` : `${(hours / 24).toFixed(1)} days`
}

/** The one number that a chart draws. */
export function figureNumber(kind: IndicatorKind, figure: Figure): number | null {
  if (kind === 'count') return figure.cases
  if (figure.cases === 0) return null
  if (kind === 'share') return 100 * figure.counted / figure.cases
  return kind === 'per-day' ? figure.perDay : figure.medianHours
}
