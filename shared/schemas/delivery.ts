import * as z from 'zod'
import type { DeliveryState, ReportStatus } from '../states'

export interface DeliveryRow {
  id: string
  reportId: string
  reportNumber: string
  version: number
  status: ReportStatus
  patientName: string
  recordNumber: string
  siteName: string
  recipient: string
  practiceName: string
  town: string
  address: string
  method: 'encrypted-pdf' | 'collection-link' | 'letter' | 'telephone'
  state: DeliveryState
  stateSince: string
  stateReason: string
  holdUntil: string | null
  attempts: number
  messageId: string | null
  referralId: string
  studyId: string
  acknowledgedAt: string | null
  /** How often the page of the mail's link was opened, and the report collected there. */
  opened: number
  collected: number
  /** Who collected it last, as they said. */
  collectedBy: string | null
  /** The collection link works until then; null where there is none. */
  linkUntil: string | null
  incidentId: string | null
  byHand: { means: 'letter' | 'telephone' | 'in-person', told: string, at: string, readBack: boolean } | null
}
export const withdrawSchema = z.object({ reason: z.string().trim().min(3, 'Give the reason.').max(500) })
/** By hand: how, to whom, when, and whether a result told by telephone was read back. */
export const byHandSchema = z.object({
  means: z.enum(['letter', 'telephone', 'in-person'], 'Choose how it was delivered.'),
  told: z.string().trim().min(2, 'Say who got it.').max(200),
  at: z.iso.datetime({ offset: true, message: 'Enter date and time.' }),
  readBack: z.boolean().default(false),
})
export type ByHandInput = z.output<typeof byHandSchema>
export const byHandWords: Record<ByHandInput['means'], string> = { 'letter': 'by letter', 'telephone': 'by telephone', 'in-person': 'in person' }
/** How a person resolves the state "uncertain", follows up one that nobody acknowledged, or sends again after a failure. */
export const resolveDeliverySchema = z.object({ outcome: z.enum(['arrived', 'send-again', 'by-hand']), note: z.string().trim().min(3, 'Say how you know.').max(500), hand: byHandSchema.optional() })
  .refine(({ outcome, hand }) => outcome !== 'by-hand' || hand !== undefined, { path: ['hand.told'], message: 'Say how, to whom and when it was delivered.' })

/** The report goes to somebody else of the directory; `insteadOf` is who got it by mistake. */
export const sendToSchema = z.object({ physicianId: z.string().min(1, 'Choose the recipient from the directory.').max(64), reason: z.string().trim().min(3, 'Give the reason.').max(500), insteadOf: z.string().max(64).optional() })

/** "I think this is wrong", from whoever has the link of the mail. */
export const replySchema = z.object({ words: z.string().trim().min(10, 'Say in a sentence what looks wrong.').max(2000, 'Say it in 2,000 characters at most.'), fromName: z.string().trim().max(200).default('') })
export const answerReplySchema = z.object({ answer: z.string().trim().min(3, 'Write what was answered, and how.').max(2000) })
export interface ReplyView { id: string, reportId: string, version: number, words: string, fromName: string, recipient: string, practiceName: string, town: string, phone: string, at: string, answer: string, answeredAt: string | null, answeredBy: string | null }

/** A delivery that somebody has to go after, the most urgent first. */
export interface ChaseRow extends Omit<DeliveryRow, 'holdUntil'> { urgency: 'routine' | 'urgent' | 'same-week', since: string, dueAt: string, phone: string, taskId: string | null, ownerId: string | null, ownerName: string | null }

export const finishTaskSchema = z.object({ resolution: z.string().trim().max(500).default('') }).nullish()

/** GET /api/acknowledge/:token: nothing about the patient. */
export interface AcknowledgeView { reportNumber: string, version: number, organisation: string, superseded: boolean, withdrawn: boolean, acknowledgedAt: string | null, /** the collection link is older than it may be */ expired: boolean, /** what the recipient wrote back, without their words */ replies: { at: string, answeredAt: string | null }[], /** the report is collected here, with the passphrase of the practice */ collect: boolean }
export const collectorsSchema = z.object({ passphrase: z.string().trim().min(1, 'Enter the passphrase of your practice.').max(400) })
export const collectSchema = collectorsSchema.extend({ collectorId: z.uuid('Choose who collects.') })
/** POST /api/acknowledge/:token/collectors: who may collect for the practice, told to whoever has its passphrase. */
export interface Collector { id: string, name: string, duty: string }
export interface TaskRow { id: string, kind: string, sentence: string, createdAt: string, dueAt: string | null, siteName: string | null, ownerName: string | null, link: string | null }
