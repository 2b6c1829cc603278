import type { ReportLanguage } from '#shared/report/languages'
import type { Generated, Insertable, Selectable } from 'kysely'

export interface ReferralTable {
  id: string
  number: string
  patientId: string
  siteId: string
  physicianId: string | null
  state: 'draft' | 'received' | 'returned' | 'accepted' | 'booked' | 'did-not-attend' | 'attended' | 'answered' | 'declined' | 'cancelled' | 'entered-in-error'
  stateSince: string
  stateReason: Generated<string>
  urgency: Generated<'routine' | 'urgent' | 'same-week'>
  urgencyReason: Generated<string>
  clinicalQuestion: Generated<string>
  side: 'right' | 'left' | 'both' | 'midline' | null
  bodySite: Generated<string>
  symptoms: Generated<string>
  onset: Generated<string>
  weakness: Generated<string>
  sensorySymptoms: Generated<string>
  pain: Generated<string>
  examination: Generated<string>
  provisionalDiagnosis: Generated<string>
  previousStudies: Generated<string>
  cautionsJson: Generated<string>
  needs: Generated<string>
  consentElectronic: Generated<string>
  reportLanguage: Generated<ReportLanguage>
  protocol: string | null
  receivedAt: string | null
  /** Who looks after it at the clinic. */
  ownerId: string | null
  /** Kept by triggers of the booking table. */
  bookingStartsAt: Generated<string | null>
  createdAt: string
  createdBy: string
  revision: Generated<number>
}
export type Referral = Selectable<ReferralTable>
export type NewReferral = Insertable<ReferralTable>
