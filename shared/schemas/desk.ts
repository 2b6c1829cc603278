import * as z from 'zod'
import type { FieldError } from '../errors'
import type { DeliveryState, ReferralState, ReportStatus } from '../states'
import { limitSexes, pageQuerySchema, referralSides } from './common'
import type { ReferralSide } from './common'
import { replySchema } from './delivery'
import { answerLetterSchema, type OpenedLetter } from './letter'
import { patientSchema } from './patient'
import { missingForBooking, referralSchema, urgencies, type Urgency } from './referral'

export const deskQuerySchema = pageQuerySchema.extend({ show: z.enum(['all', 'open', 'answered']).default('all'), pageSize: z.coerce.number().int().min(1).max(100).default(25) })

/** A final version that was sent to the physician who is signed in. */
export interface DeskReport { reportId: string, number: string, version: number, status: ReportStatus, signedAt: string, superseded: boolean, deliveryId: string, deliveryState: DeliveryState, acknowledgedAt: string | null }

export interface DeskReferral {
  id: string
  number: string
  state: ReferralState
  stateSince: string
  /** What the laboratory asks, or why it declined; '' in the other states. */
  reason: string
  urgency: Urgency
  question: string
  side: ReferralSide | null
  familyName: string
  givenName: string
  birthDate: string
  siteName: string
  sitePhone: string
  timeZone: string
  bookedFor: string | null
  /** True where the referral is another physician's and this one gets a copy. */
  copy: boolean
  /** What the laboratory asks can be answered here. */
  answerable: boolean
  reports: DeskReport[]
}
export interface DeskPage { rows: DeskReferral[], total: number, page: number, pageSize: number, /** practices that the account stands for; none: it opens nothing */ practices: { name: string, town: string }[] }

/** A referral as it is typed at the desk: anything may be blank or half a date while it is a draft. */
export const deskDraftSchema = z.object({
  physicianId: z.string().max(64).nullable().default(null),
  siteId: z.string().max(64).nullable().default(null),
  familyName: z.string().max(80).default(''),
  givenName: z.string().max(80).default(''),
  birthDate: z.string().max(40).default(''),
  sexForLimits: z.enum(limitSexes).nullable().default(null),
  phone: z.string().max(40).default(''),
  clinicalQuestion: z.string().max(500).default(''),
  side: z.enum(referralSides).nullable().default(null),
  bodySite: z.string().max(120).default(''),
  symptoms: z.string().max(2000).default(''),
  examination: z.string().max(2000).default(''),
  cautions: referralSchema.shape.cautions,
  urgency: z.enum(urgencies).default('routine'),
  urgencyReason: z.string().max(300).default(''),
  consentElectronic: referralSchema.shape.consentElectronic,
})
export type DeskDraftValues = z.output<typeof deskDraftSchema>

/** PUT /api/desk/drafts/:id and its sending: the revision that the form was filled from. */
export const saveDraftSchema = z.object({ revision: z.number().int().min(1), values: deskDraftSchema })
export interface DeskDraftView { id: string, revision: number, savedAt: string, values: DeskDraftValues }
/** What the form of a new referral needs, and the drafts that wait. */
export interface DeskForm {
  practices: { physicianId: string, name: string, town: string }[]
  sites: { id: string, name: string, town: string }[]
  drafts: { id: string, savedAt: string, who: string }[]
}
export interface DeskSent { id: string, number: string }

/** The patient as the desk types it; what the desk does not ask stays open. */
export const deskPatientOf = (values: DeskDraftValues) => patientSchema.safeParse({ familyName: values.familyName, givenName: values.givenName, birthDate: values.birthDate, sexForLimits: values.sexForLimits, phone: values.phone })
/** The referral as the desk types it, for a patient who has a record. */
export const deskReferralOf = ({ physicianId, siteId, clinicalQuestion, side, bodySite, symptoms, examination, cautions, urgency, urgencyReason, consentElectronic }: DeskDraftValues, patientId: string) => referralSchema.safeParse({ patientId, physicianId, siteId: siteId ?? '', clinicalQuestion, side, bodySite, symptoms, examination, cautions, urgency, urgencyReason, consentElectronic })

/**
 * What stands against sending, in the order of the form; the same sentences in the page and from the server.
 *
 * @example
 * deskProblems(deskDraftSchema.parse({}))[0] // => { path: 'familyName', message: 'Enter the family name.' }
 */
export function deskProblems(values: DeskDraftValues): FieldError[] {
  const [patient, referral] = [deskPatientOf(values), deskReferralOf(values, 'new')]
  const atSomeSite = deskReferralOf({ ...values, siteId: 'any' }, 'new').data
  const ofSchema = [patient, referral].flatMap(({ error }) => error?.issues.map(issue => ({ path: issue.path.join('.'), message: issue.message })) ?? [])
  const phone = values.phone.trim() ? [] : [{ path: 'phone', message: 'Enter a telephone number of the patient, or write "none".' }]
  const birth = values.birthDate.trim() ? [] : [{ path: 'birthDate', message: 'Enter the date of birth, for example 1974-03-14.' }]
  const found = [...birth, ...ofSchema, ...phone, ...(atSomeSite ? missingForBooking(atSomeSite) : [])]
  const order = [...Object.keys(deskDraftSchema.shape).slice(2), 'physicianId', 'siteId']
  const place = (path: string) => order.indexOf(path.split('.')[0] ?? '')
  return found.filter((error, index) => found.findIndex(other => other.path === error.path) === index).sort((a, b) => place(a.path) - place(b.path))
}

/** What was asked of the physician who is signed in: the form behind the link of the mail, without a birth date to prove. */
export interface DeskRequest extends Omit<OpenedLetter, 'pass'> { number: string, siteName: string, sitePhone: string, familyName: string, givenName: string, birthDate: string }
/** POST /api/desk/referrals/:id/answer */
export const answerRequestSchema = answerLetterSchema.omit({ pass: true })

/** POST /api/desk/deliveries/:id/reply: who writes is known. */
export const deskReplySchema = replySchema.pick({ words: true })
