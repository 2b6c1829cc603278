import type { ReferralState, StudyState } from './states'

/** A field of a referral as the sentence names it: "Complete the examination". */
const fieldWords: Record<string, string> = {
  clinicalQuestion: 'the clinical question', side: 'the side', physicianId: 'the referring physician', symptoms: 'the symptoms',
  examination: 'the examination', urgencyReason: 'the reason for the urgency',
}
const wordsOf = (path: string) => fieldWords[path] ?? 'the cautions'

function completeWords(missing: readonly { path: string }[]): string {
  const words = [...new Set(missing.map(item => wordsOf(item.path)))]
  return words.length > 2 ? `Complete ${words[0]} and ${words.length - 1} more` : `Complete ${words.join(' and ')}`
}

const whileAttended: Partial<Record<StudyState, string>> = {
  'planned': 'Record', 'recording': 'Record', 'returned': 'Answer the reader\'s question', 'handed-over': 'Read and sign', 'stopped': 'Decide what follows the stopped study',
}
const byState: Partial<Record<ReferralState, string>> = {
  'draft': 'Receive', 'received': 'Accept or decline', 'returned': 'Wait for the information', 'accepted': 'Book', 'booked': 'Wait for the day',
  'did-not-attend': 'Book again or cancel', 'attended': 'Record',
}

const openStates: readonly ReferralState[] = ['received', 'accepted', 'booked', 'did-not-attend']

/**
 * What to do next with a referral, as one sentence; '' when nothing is left to do.
 *
 * @example
 * nextStep({ state: 'draft', missing: [{ path: 'examination' }], studyState: null }) // => 'Complete the examination'
 * nextStep({ state: 'attended', missing: [], studyState: 'handed-over' }) // => 'Read and sign'
 */
export function nextStep({ state, missing, studyState, cameBack = false, overdue = false, identify = false }: { state: ReferralState, missing: readonly { path: string }[], studyState: StudyState | null, /** what was asked came back and nobody noted it */ cameBack?: boolean, /** past the organisation's clock */ overdue?: boolean, /** it came from the desk and nobody has said who the patient is */ identify?: boolean }): string {
  if (identify && openStates.includes(state)) return 'Say who the patient is'
  if (state === 'received' && cameBack) return 'Look at what came back'
  if (state === 'returned' && overdue) return 'Remind the referring physician'
  if ((state === 'draft' || state === 'received') && missing.length > 0) return completeWords(missing)
  if (state === 'attended' && studyState) return whileAttended[studyState] ?? ''
  return byState[state] ?? ''
}
