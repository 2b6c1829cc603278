import type { ReferralState } from './states'

/** What the state of an own referral means for the physician who sent it. */
export const deskStateWords: Record<ReferralState, string> = {
  'draft': '', 'entered-in-error': '',
  'received': 'The laboratory has it and looks at it.',
  'returned': 'It waits for your answer.',
  'accepted': 'It is accepted; the appointment is being made.',
  'booked': 'The patient has an appointment.',
  'did-not-attend': 'The patient did not come; the laboratory makes another appointment or asks.',
  'attended': 'The patient was there; the report is being written.',
  'answered': 'The report is final.',
  'declined': 'The laboratory will not do it; its advice:',
  'cancelled': 'It was cancelled.',
}
