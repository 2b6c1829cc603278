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
}
export const withdrawSchema = z.object({ reason: z.string().trim().min(3, 'Give the reason.').max(500) })
/** How a person resolves the state "uncertain", or sends again after a failure. */
export const resolveDeliverySchema = z.object({ outcome: z.enum(['arrived', 'send-again', 'by-hand']), note: z.string().trim().min(3, 'Say how you know.').max(500) })

export const finishTaskSchema = z.object({ resolution: z.string().trim().max(500).default('') }).nullish()

/** GET /api/acknowledge/:token: nothing about the patient. */
export interface AcknowledgeView { reportNumber: string, version: number, organisation: string, superseded: boolean, withdrawn: boolean, acknowledgedAt: string | null, /** the report is collected here, with the passphrase of the practice */ collect: boolean }
export const collectSchema = z.object({ passphrase: z.string().trim().min(1, 'Enter the passphrase of your practice.').max(400) })
export interface TaskRow { id: string, kind: string, sentence: string, createdAt: string, dueAt: string | null, siteName: string | null, ownerName: string | null, link: string | null }
