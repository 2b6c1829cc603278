/**
 * States and moves of everything that has a clock. One table each; services ask `mayMove` and the database
 * update names the state it expects, so that only one of two simultaneous moves wins.
 */
export const referralStates = ['draft', 'received', 'returned', 'accepted', 'booked', 'did-not-attend', 'attended', 'answered', 'declined', 'cancelled', 'entered-in-error'] as const
export type ReferralState = (typeof referralStates)[number]
export const referralMoves: Record<ReferralState, readonly ReferralState[]> = {
  'draft': ['received', 'declined', 'cancelled', 'entered-in-error'],
  'received': ['accepted', 'returned', 'declined', 'cancelled', 'entered-in-error'],
  'returned': ['received', 'declined', 'cancelled', 'entered-in-error'],
  'accepted': ['booked', 'declined', 'cancelled', 'entered-in-error'],
  'booked': ['attended', 'did-not-attend', 'accepted', 'declined', 'cancelled', 'entered-in-error'],
  'did-not-attend': ['booked', 'cancelled', 'entered-in-error'],
  // Back to booked or accepted when the study was begun under the wrong record; cancelled when it was stopped and nothing follows.
  'attended': ['answered', 'booked', 'accepted', 'cancelled', 'entered-in-error'],
  'answered': ['entered-in-error'],
  'declined': [],
  'cancelled': [],
  'entered-in-error': [],
}
/** FHIR R4 ServiceRequest.status for each state (request-status code system). */
export const referralFhirStatus: Record<ReferralState, 'draft' | 'active' | 'on-hold' | 'completed' | 'revoked' | 'entered-in-error'> = {
  'draft': 'draft', 'received': 'active', 'returned': 'on-hold', 'accepted': 'active', 'booked': 'active', 'did-not-attend': 'active', 'attended': 'active', 'answered': 'completed', 'declined': 'revoked', 'cancelled': 'revoked', 'entered-in-error': 'entered-in-error',
}

export const studyStates = ['planned', 'recording', 'handed-over', 'returned', 'read', 'stopped', 'entered-in-error'] as const
export type StudyState = (typeof studyStates)[number]
export const studyMoves: Record<StudyState, readonly StudyState[]> = {
  'planned': ['recording', 'stopped', 'entered-in-error'],
  'recording': ['handed-over', 'stopped', 'entered-in-error'],
  'handed-over': ['returned', 'read', 'entered-in-error'],
  'returned': ['handed-over', 'stopped', 'entered-in-error'],
  'read': ['entered-in-error'],
  // To the reader for a technical report of what was measured before it was stopped.
  'stopped': ['handed-over', 'entered-in-error'],
  'entered-in-error': [],
}

export const reportStatuses = ['preliminary', 'final', 'appended', 'amended', 'corrected', 'cancelled', 'entered-in-error'] as const
export type ReportStatus = (typeof reportStatuses)[number]
/** FHIR R4 DiagnosticReport.status: never back to final. */
export const reportMoves: Record<ReportStatus, readonly ReportStatus[]> = {
  'preliminary': ['final', 'cancelled'],
  'final': ['appended', 'amended', 'corrected', 'entered-in-error'],
  'appended': ['appended', 'amended', 'corrected', 'entered-in-error'],
  'amended': ['appended', 'amended', 'corrected', 'entered-in-error'],
  'corrected': ['appended', 'amended', 'corrected', 'entered-in-error'],
  'cancelled': [],
  'entered-in-error': [],
}

export const deliveryStates = ['held', 'queued', 'sending', 'sent', 'acknowledged', 'failed', 'given-up', 'bounced', 'uncertain', 'withdrawn', 'by-hand'] as const
export type DeliveryState = (typeof deliveryStates)[number]
export const deliveryMoves: Record<DeliveryState, readonly DeliveryState[]> = {
  'held': ['queued', 'withdrawn'],
  'queued': ['sending', 'withdrawn', 'failed'],
  'sending': ['sent', 'failed', 'uncertain', 'given-up'],
  'sent': ['acknowledged', 'bounced', 'queued', 'by-hand', 'withdrawn'],
  'acknowledged': ['withdrawn'],
  'failed': ['queued', 'sending', 'given-up', 'withdrawn', 'by-hand'],
  'given-up': ['queued', 'by-hand', 'withdrawn'],
  'bounced': ['queued', 'by-hand', 'withdrawn'],
  'uncertain': ['sent', 'queued', 'by-hand', 'acknowledged', 'bounced', 'withdrawn'],
  'withdrawn': [],
  'by-hand': ['acknowledged', 'withdrawn'],
}

export const stateLabels: Record<ReferralState | StudyState | ReportStatus | DeliveryState, string> = {
  'draft': 'draft', 'received': 'received', 'returned': 'returned', 'accepted': 'accepted', 'booked': 'booked', 'did-not-attend': 'did not attend', 'attended': 'attended', 'answered': 'answered', 'declined': 'declined', 'cancelled': 'cancelled', 'entered-in-error': 'entered in error',
  'planned': 'planned', 'recording': 'recording', 'handed-over': 'handed over', 'read': 'read', 'stopped': 'stopped',
  'preliminary': 'preliminary', 'final': 'final', 'appended': 'appended', 'amended': 'amended', 'corrected': 'corrected',
  'held': 'held', 'queued': 'queued', 'sending': 'sending', 'sent': 'sent', 'acknowledged': 'acknowledged', 'failed': 'failed', 'given-up': 'given up', 'bounced': 'bounced', 'uncertain': 'uncertain', 'withdrawn': 'withdrawn', 'by-hand': 'by hand',
}

/** @example mayMove(studyMoves, 'handed-over', 'returned') // => true */
export function mayMove<S extends string>(moves: Record<S, readonly S[]>, from: S, to: S): boolean {
  return moves[from].includes(to)
}
