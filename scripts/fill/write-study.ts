import { randomUUID } from 'node:crypto'
import { sha256Hex } from '#server/services/canonical-json'
import { localDate } from '#server/services/site-time'
import { CALCULATION_VERSION } from '#shared/calculations/assess-study'
import { cautions } from '#shared/schemas/referral'
import { meanings } from '#shared/schemas/report'
import { plusDays } from '../demo/clock'
import { familyNames, mensNames, womensNames } from '../demo/people'
import type { Random } from '../demo/random'
import type { AuditChain } from './audit-chain'
import { fillGaps, type Pattern } from './pattern'
import type { Physician } from './setting'
import type { Counters, Writer } from './writer'

export interface Desk { writer: Writer, counters: Counters, chain: AuditChain, random: Random }

const iso = (moment: Date) => moment.toISOString()
const after = (moment: Date, minutes: number) => new Date(moment.getTime() + minutes * 60_000)
const cautionsJson = JSON.stringify(Object.fromEntries(cautions.map(caution => [caution.id, 'no'])))

/** The moments of one study, from the referral to the recipient's "seen". */
function momentsOf(random: Random, starts: Date) {
  const received = plusDays(starts, -random.whole(6, 20))
  const ends = after(starts, 45)
  const handedOver = after(starts, random.whole(25, 44))
  const taken = after(handedOver, random.whole(20, 1800))
  const signed = after(taken, random.whole(3, 15))
  const sent = after(signed, 2)
  return { received: iso(received), accepted: iso(after(received, 60)), booked: iso(after(received, 90)), starts: iso(starts), ends: iso(ends), measured: iso(after(starts, 8)), handedOver: iso(handedOver), taken: iso(taken), signed: iso(signed), sent: iso(sent), seen: iso(after(sent, random.whole(20, 2800))) }
}
type Moments = ReturnType<typeof momentsOf>

interface Made { pattern: Pattern, physician: Physician, at: Moments, ids: Record<'patient' | 'referral' | 'study' | 'run' | 'row' | 'temperature' | 'report' | 'version' | 'delivery', string>, day: string, year: string }

function writePatient({ writer, counters, random }: Desk, { pattern: { person, place }, ids, day, at }: Made) {
  const birth = plusDays(new Date(`${day}T00:00:00Z`), -random.whole(1, 360))
  birth.setUTCFullYear(birth.getUTCFullYear() - person.ageYears)
  const familyName = random.chance(0.4) ? random.pick(familyNames) : `${random.pick(familyNames)}-${random.pick(familyNames)}`
  const patient = { recordNumber: counters.next('P'), familyName, givenName: random.pick(person.sex === 'female' ? womensNames : mensNames), birthDate: iso(birth).slice(0, 10) }
  writer.insert('patient', { id: ids.patient, ...patient, sexForLimits: person.sex, mergedInto: null, createdAt: at.received, createdBy: place.administrator.id })
  return patient
}

function writeReferral({ writer, counters, random }: Desk, { pattern, physician, ids, at, year }: Made): string {
  const { place: { site, administrator }, picture, side } = pattern
  const number = counters.next(`REF-${year}`)
  writer.insert('referral', {
    id: ids.referral, number, patientId: ids.patient, siteId: site.id, physicianId: physician.id, state: 'answered', stateSince: at.signed, urgency: random.chance(0.12) ? 'urgent' : 'routine',
    clinicalQuestion: pattern.question, side, bodySite: picture.limb === 'foot' ? 'legs' : 'hands', symptoms: pattern.symptoms, onset: pattern.onset, weakness: 'no', sensorySymptoms: 'yes', pain: 'no',
    examination: pattern.examination, provisionalDiagnosis: picture.diagnosis, previousStudies: 'None.', cautionsJson, consentElectronic: 'yes', protocol: null, receivedAt: at.received, createdAt: at.received, createdBy: administrator.id,
  })
  writer.insert('booking', { id: randomUUID(), referralId: ids.referral, siteId: site.id, room: 'Room 1', technologistId: null, startsAt: at.starts, endsAt: at.ends, state: 'attended', createdAt: at.booked, createdBy: administrator.id })
  return number
}

function writeStudy({ writer, counters }: Desk, { pattern, ids, at, day, year }: Made): string {
  const { place: { site, technologist, reader }, picture, side, person } = pattern
  const number = counters.next(`NCS-${year}`)
  const confirmation = { identifiers: ['name', 'birth-date'], side, sideReason: '', cautionsRead: true, at: at.starts, byName: technologist.name }
  writer.insert('study', {
    id: ids.study, number, referralId: ids.referral, patientId: ids.patient, siteId: site.id, state: 'read', stateSince: at.signed, studyDate: day, startedAt: at.starts, handedOverAt: at.handedOver,
    technologistId: technologist.id, readerId: reader.id, takenAt: at.taken, protocol: null, heightCm: person.heightCm, weightKg: person.weightKg, confirmationJson: JSON.stringify(confirmation), returnRunId: null, policyJson: null, summaryJson: pattern.summaryJson, createdAt: at.starts,
  })
  writer.insert('studyTemperature', { id: ids.temperature, studyId: ids.study, segment: picture.limb === 'foot' ? 'foot' : 'hand', side, celsius: pattern.celsius, at: at.measured, method: 'skin probe', removedAt: null, savedBy: technologist.id })
  writer.insert('studyRun', { id: ids.run, studyId: ids.study, technique: pattern.technique, side, position: 1, settingsJson: pattern.settingsJson, removedAt: null, createdAt: at.starts, createdBy: technologist.id })
  writer.insert('studyRow', { id: ids.row, runId: ids.run, site: pattern.row.site, position: 1, removedAt: null })
  for (const [field, entryJson] of pattern.row.values) writer.insert('studyCell', { rowId: ids.row, field, studyId: ids.study, entryJson, revision: 1, savedAt: at.measured, savedBy: technologist.id })
  return number
}

type Names = ReturnType<typeof writePatient> & { referralNumber: string, studyNumber: string }

function writeReport({ writer, counters, chain }: Desk, { pattern, physician, ids, at, day, year }: Made, names: Names): void {
  const { place: { site, reader } } = pattern
  const number = counters.next(`REP-${year}`)
  const snapshotJson = fillGaps(pattern.snapshot, {
    ...names, patientId: ids.patient, receivedAt: at.received, physician: physician.name, practice: physician.practiceName, town: physician.town, studyId: ids.study, studyDate: day, startedAt: at.starts,
    run: ids.run, row: ids.row, temperature: ids.temperature, temperatureAt: at.measured, reportNumber: number, signedAt: at.signed,
  })
  const snapshotSha256 = sha256Hex(snapshotJson)
  writer.insert('report', { id: ids.report, studyId: ids.study, number, draftJson: pattern.draftJson, readyFingerprint: null, draftedBy: reader.id, draftedAt: at.taken, createdAt: at.taken })
  writer.insert('reportVersion', {
    id: ids.version, reportId: ids.report, version: 1, status: 'final', snapshotJson, snapshotSha256, calculationVersion: CALCULATION_VERSION,
    signedBy: reader.id, signedAt: at.signed, signedName: reader.printedName || reader.name, signedCredentials: reader.credentials, meaning: meanings[0], auditHead: chain.head,
  })
  chain.add(writer, { at: at.signed, actorId: reader.id, actorLabel: reader.name, siteId: site.id, name: 'report.signed', subject: 'report', subjectId: ids.report, patientId: ids.patient, data: { number, version: 1, status: 'final', sha256: snapshotSha256 } })
}

function writeDelivery({ writer, random }: Desk, { pattern, physician, ids, at }: Made): boolean {
  const seen = random.chance(0.88)
  const siteId = pattern.place.site.id
  writer.insert('delivery', {
    id: ids.delivery, reportVersionId: ids.version, physicianId: physician.id, practiceId: physician.practiceId, siteId, address: physician.email, method: 'encrypted-pdf',
    state: seen ? 'acknowledged' : 'sent', stateSince: seen ? at.seen : at.sent, holdUntil: at.sent, attempts: 1, acknowledgeTokenHash: null, acknowledgedAt: seen ? at.seen : null, sentAt: at.sent, createdAt: at.signed,
  })
  writer.insert('outboxMail', {
    id: randomUUID(), template: 'report-ready', deliveryId: ids.delivery, toAddress: physician.email, messageId: `<${ids.delivery}@orthodrome.example>`, state: 'sent',
    dueAt: at.sent, attempts: 1, leaseOwner: null, leaseUntil: null, lastByteAt: at.sent, sentAt: at.sent, createdAt: at.signed,
  })
  return seen
}

function writeMoves({ writer }: Desk, { pattern: { place }, ids, at }: Made, seen: boolean): void {
  const [desk, bench, reader] = [place.administrator.id, place.technologist.id, place.reader.id]
  const move = (subject: 'referral' | 'study' | 'report-version' | 'delivery', subjectId: string, steps: [to: string, at: string, by: string | null][], from: string | null = null) => {
    for (const [toState, moment, byUserId] of steps) {
      writer.insert('stateChange', { subject, subjectId, fromState: from, toState, at: moment, byUserId })
      from = toState
    }
  }
  move('referral', ids.referral, [['draft', at.received, desk], ['received', at.received, desk], ['accepted', at.accepted, desk], ['booked', at.booked, desk], ['attended', at.starts, bench], ['answered', at.signed, reader]])
  move('study', ids.study, [['planned', at.starts, bench], ['recording', at.starts, bench], ['handed-over', at.handedOver, bench], ['read', at.signed, reader]])
  move('report-version', ids.version, [['final', at.signed, reader]], 'preliminary')
  move('delivery', ids.delivery, [['held', at.signed, reader], ['queued', at.sent, null], ['sending', at.sent, null], ['sent', at.sent, null], ...seen ? [['acknowledged', at.seen, null] as [string, string, null]] : []])
}

/** One finished study with everything around it, inside the caller's transaction. */
export function writeFinishedStudy(desk: Desk, pattern: Pattern, physician: Physician, starts: Date): void {
  const uuid = randomUUID
  const day = localDate(starts, pattern.place.site.timeZone)
  const made: Made = {
    pattern, physician, at: momentsOf(desk.random, starts), day, year: day.slice(0, 4),
    ids: { patient: uuid(), referral: uuid(), study: uuid(), run: uuid(), row: uuid(), temperature: uuid(), report: uuid(), version: uuid(), delivery: uuid() },
  }
  const patient = writePatient(desk, made)
  const referralNumber = writeReferral(desk, made)
  const studyNumber = writeStudy(desk, made)
  writeReport(desk, made, { ...patient, referralNumber, studyNumber })
  writeMoves(desk, made, writeDelivery(desk, made))
}
