import * as z from 'zod'
import type { DeliveryState, ReferralState, ReportStatus } from '../states'
import { pageQuerySchema } from './common'
import type { ReferralSide } from './common'
import type { Urgency } from './referral'

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
  reports: DeskReport[]
}
export interface DeskPage { rows: DeskReferral[], total: number, page: number, pageSize: number, /** practices that the account stands for; none: it opens nothing */ practices: { name: string, town: string }[] }
