import * as z from 'zod'
import { returnReasonIds, type Asked, type CompletableField } from '../return-reasons'
import { isoDateSchema } from './common'
import { referralSchema, type UploadView } from './referral'

/** POST /api/referrals/:id/return */
export const returnSchema = z.object({
  reasons: z.array(z.enum(returnReasonIds)).min(1, 'Choose what is missing.').max(returnReasonIds.length),
  /** In own words, for the page behind the link; never in the mail. */
  note: z.string().trim().max(1000).default(''),
}).refine(body => !body.reasons.includes('other') || body.note.length >= 3, { path: ['note'], message: 'Write the question.' })
export type ReturnInput = z.output<typeof returnSchema>

/** POST /api/referrals/:id/decline: the reason is the advice that the referring physician reads. */
export const declineSchema = z.object({ reason: z.string().trim().min(3, 'Give the reason or the advice.').max(1000), tell: z.boolean().default(true) })

/** The link of a mail, before anything is known of who opened it: our number, initials, and whom to call. */
export interface LetterView {
  kind: 'information' | 'advice'
  number: string
  initials: string
  organisation: string
  siteName: string
  sitePhone: string
  /** open · answered or read before · no longer needed · locked after wrong birth dates */
  state: 'open' | 'done' | 'withdrawn' | 'locked'
}

/** POST /api/letters/:token/open: the second item that the practice knows. */
export const openLetterSchema = z.object({ birthDate: isoDateSchema })
const completable = referralSchema.pick({ clinicalQuestion: true, side: true, bodySite: true, symptoms: true, onset: true, examination: true, provisionalDiagnosis: true, previousStudies: true, urgencyReason: true, cautions: true, consentElectronic: true })
export type LetterValues = z.output<typeof completable>
/** What stands behind the link once the birth date was right. `pass` goes with every further call. */
export interface OpenedLetter {
  pass: string
  note: string
  asked: Asked
  values: Partial<LetterValues>
  uploads: Pick<UploadView, 'id' | 'originalName' | 'byteCount'>[]
}

/** POST /api/letters/:token/answer. Only what was asked is taken. */
export const answerLetterSchema = z.object({
  pass: z.string().min(10).max(200),
  values: z.object({ ...completable.shape }).partial().default({}),
  words: z.string().trim().max(2000).default(''),
})
export type AnswerLetter = z.output<typeof answerLetterSchema>

/** What came back, as the referral keeps and shows it. */
export interface LetterAnswer { changes: { field: CompletableField, before: unknown, after: unknown }[], words: string, files: number }
export interface ReferralLetterView {
  id: string
  kind: 'information' | 'advice'
  labels: string[]
  note: string
  createdAt: string
  createdBy: string
  /** null when the physician could not be mailed: then somebody telephones. */
  mailedTo: string | null
  mailState: string | null
  reminders: number
  remindedAt: string | null
  closedAt: string | null
  closedBecause: string | null
  answer: LetterAnswer | null
  seenAt: string | null
}
