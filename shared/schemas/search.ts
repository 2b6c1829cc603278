import type { ReferralState, StudyState } from '../states'

/** GET /api/search: the few best of each kind, at sites where the person may see them. */
export interface SearchHits {
  patients: { id: string, familyName: string, givenName: string, birthDate: string, recordNumber: string }[]
  referrals: { id: string, number: string, patientName: string, state: ReferralState, siteName: string, question: string }[]
  studies: { id: string, number: string, patientName: string, state: StudyState, siteName: string, studyDate: string }[]
}
