import * as z from 'zod'
import { reportLanguages } from '../report/languages'
import { referralSides } from './common'
import type { ReferralLetterView } from './letter'
import type { Namesake, PatientBand, PatientView } from './patient'
import type { ReferralState, StudyState, ReportStatus, DeliveryState } from '../states'

export const threeAnswers = ['yes', 'no', 'not-asked'] as const
export type ThreeAnswer = (typeof threeAnswers)[number]

/**
 * Cautions asked at intake and confirmed at the bench. Sources: the clinical notes of this project's README
 * (electrical safety, needle examination); a temporary pacing wire stops the study.
 */
export const cautions = [
  { id: 'cardiac-device', label: 'Implanted cardiac device or stimulator', chip: 'cardiac device' },
  { id: 'temporary-pacing-wire', label: 'Temporary pacing wire or other external cardiac lead', chip: 'PACING WIRE' },
  { id: 'central-line', label: 'Central venous line', chip: 'central line' },
  { id: 'anticoagulant', label: 'Anticoagulant or antiplatelet medicine, bleeding disorder', chip: 'anticoagulant' },
  { id: 'lymphoedema', label: 'Lymphoedema', chip: 'lymphoedema' },
  { id: 'skin-infection', label: 'Skin infection or wound', chip: 'skin infection' },
  { id: 'pregnancy', label: 'Pregnancy', chip: 'pregnancy' },
  { id: 'adhesive-allergy', label: 'Allergy to adhesives or latex', chip: 'adhesive allergy' },
] as const
export type CautionId = (typeof cautions)[number]['id']
export const cautionIds = cautions.map(c => c.id) as [CautionId, ...CautionId[]]

export const urgencies = ['routine', 'urgent', 'same-week'] as const
export type Urgency = (typeof urgencies)[number]
export const urgencyLabels: Record<Urgency, string> = { 'routine': 'routine', 'urgent': 'urgent', 'same-week': 'same week' }

/** Everything may be blank while it is a draft; `missingForBooking` says what is needed before it can be accepted and booked. */
export const referralSchema = z.object({
  patientId: z.string().min(1, 'Choose the patient.'),
  siteId: z.string().min(1, 'Choose the site.'),
  physicianId: z.string().nullable().default(null),
  copyPhysicianIds: z.array(z.string()).max(10).default([]),
  clinicalQuestion: z.string().trim().max(500).default(''),
  side: z.enum(referralSides).nullable().default(null),
  bodySite: z.string().trim().max(120).default(''),
  symptoms: z.string().trim().max(2000).default(''),
  onset: z.string().trim().max(120).default(''),
  weakness: z.enum(threeAnswers).default('not-asked'),
  sensorySymptoms: z.enum(threeAnswers).default('not-asked'),
  pain: z.enum(threeAnswers).default('not-asked'),
  examination: z.string().trim().max(2000).default(''),
  provisionalDiagnosis: z.string().trim().max(300).default(''),
  previousStudies: z.string().trim().max(2000).default(''),
  cautions: z.partialRecord(z.enum(cautionIds), z.enum(threeAnswers)).default({}),
  urgency: z.enum(urgencies).default('routine'),
  urgencyReason: z.string().trim().max(300).default(''),
  needs: z.string().trim().max(300).default(''),
  consentElectronic: z.enum(threeAnswers).default('not-asked'),
  /** Words of the report and its disclaimer; what people type stays as they typed it. */
  reportLanguage: z.enum(reportLanguages, 'Choose a language of the report.').default('en'),
})
export type ReferralInput = z.infer<typeof referralSchema>

/** What is missing before a referral can be accepted and booked, as field and sentence. */
export function missingForBooking(referral: ReferralInput): { path: string, message: string }[] {
  const missing: { path: string, message: string }[] = []
  const need = (ok: unknown, path: string, message: string) => {
    if (!ok) missing.push({ path, message })
  }
  need(referral.clinicalQuestion, 'clinicalQuestion', 'Enter the clinical question in one sentence.')
  need(referral.side, 'side', 'Choose the side.')
  need(referral.physicianId, 'physicianId', 'Choose the referring physician.')
  need(referral.symptoms, 'symptoms', 'Enter the symptoms.')
  need(referral.examination, 'examination', 'Enter the examination, or write "not examined".')
  need(referral.urgency === 'routine' || referral.urgencyReason, 'urgencyReason', 'Say why it is urgent.')
  for (const caution of cautions) {
    const answer = referral.cautions[caution.id] ?? 'not-asked'
    if (answer === 'not-asked' && (caution.id === 'cardiac-device' || caution.id === 'temporary-pacing-wire')) missing.push({ path: `cautions.${caution.id}`, message: `Ask about: ${caution.label.toLowerCase()}.` })
  }
  return missing
}

export const acceptReferralSchema = z.object({ protocol: z.string().min(1, 'Choose a protocol.').max(80), urgency: z.enum(urgencies).optional(), /** needed when the urgency is another than was asked */ urgencyReason: z.string().trim().max(300).optional() })
/** POST /api/referrals/:id/urgency */
export const urgencySchema = z.object({ urgency: z.enum(urgencies), reason: z.string().trim().min(3, 'Give the reason.').max(300) })
export const reasonSchema = z.object({ reason: z.string().trim().min(3, 'Give the reason.').max(500) })
export const bookingSchema = z.object({
  siteId: z.string().min(1, 'Choose the site.'),
  room: z.string().min(1, 'Choose the room.').max(60),
  technologistId: z.string().nullable().default(null),
  /** Local day and time at the site; the server adds the site's zone. */
  date: z.iso.date('Enter the date as year-month-day, for example 2026-03-09.'),
  time: z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Enter the time as hours and minutes, for example 14:30.'),
  minutes: z.coerce.number().int().min(10).max(240).default(60),
  /** Said on purpose: the site does not work at that time. */
  outsideHours: z.boolean().optional(),
  /** Why a booking moves; it stands in the history. */
  reason: z.string().trim().max(300).optional(),
})
export type BookingInput = z.infer<typeof bookingSchema>

export interface UploadView { id: string, originalName: string, mediaType: string, byteCount: number, createdAt: string, createdBy: string }
export interface BookingView { id: string, siteId: string, siteName: string, room: string, technologistId: string | null, technologistName: string | null, startsAt: string, endsAt: string, state: string, reason: string }

/** The four nodes of the route strip. */
export interface RouteNode { id: 'intake' | 'bench' | 'reading' | 'dispatch', label: string, state: 'done' | 'here' | 'ahead', words: string, since: string | null, withWhom: string | null, /** moves that went back, drawn as such */ wentBack: { at: string, reason: string }[] }

export interface ReferralRow {
  id: string
  number: string
  patientId: string
  patientName: string
  birthDate: string
  recordNumber: string
  siteId: string
  siteName: string
  physicianName: string | null
  state: ReferralState
  stateSince: string
  urgency: Urgency
  clinicalQuestion: string
  side: ReferralInput['side']
  /** "Complete the examination", "Accept", "Book": what to do next. */
  nextStep: string
  studyId: string | null
  bookingStartsAt: string | null
  ownerName: string | null
  /** What was asked came back and nobody noted it yet. */
  cameBack: boolean
  /** Past its hours by the organisation's clocks; null where none runs. */
  dueAt: string | null
}
/** POST /api/referrals/:id/identify: the record of the register that is the same person, or null for a new one. */
export const identifySchema = z.object({ knownId: z.string().max(64).nullable(), reason: z.string().trim().max(500).default('') })
/** While `identifiedAt` is null the patient's record is what the desk typed, and `candidates` may be the same person. */
export interface DeskOrigin { sentBy: string, sentAt: string, identifiedAt: string | null, identifiedBy: string | null, outcome: 'new' | 'known' | null, candidates: Namesake[] }
export interface ReferralView extends ReferralInput {
  id: string
  number: string
  state: ReferralState
  stateSince: string
  stateReason: string
  protocol: string | null
  revision: number
  createdAt: string
  patient: PatientView
  band: PatientBand
  physician: { id: string, name: string, practiceName: string, town: string, emailVerified: boolean } | null
  /** Those who get a copy, in the order of `copyPhysicianIds`. */
  copyPhysicians: { id: string, name: string, practiceName: string, town: string, emailVerified: boolean }[]
  missing: { path: string, message: string }[]
  uploads: UploadView[]
  booking: BookingView | null
  study: { id: string, number: string, state: StudyState } | null
  report: { id: string, status: ReportStatus, version: number } | null
  owner: { id: string, name: string } | null
  letters: ReferralLetterView[]
  /** It was sent from the desk of a referring physician. */
  desk: DeskOrigin | null
  dueAt: string | null
  receivedAt: string | null
  deliveries: { id: string, state: DeliveryState, recipient: string }[]
  route: RouteNode[]
  history: { at: string, by: string, from: string | null, to: string, reason: string }[]
}
