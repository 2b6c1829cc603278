import type { ReferralInput } from './schemas/referral'

/** Fields that a referring physician can complete through the link of a mail, as the page names them. */
export const completableFields = {
  clinicalQuestion: 'Clinical question', side: 'Side', bodySite: 'Where', symptoms: 'Symptoms', onset: 'Onset', examination: 'Examination', provisionalDiagnosis: 'Provisional diagnosis',
  previousStudies: 'Earlier studies, surgery, imaging', urgencyReason: 'Why it is urgent', cautions: 'Cautions', consentElectronic: 'Consent to the report by e-mail',
} as const satisfies Partial<Record<keyof ReferralInput, string>>
export type CompletableField = keyof typeof completableFields

/** Why a referral goes back, and what is asked with it. `needed` must be filled before it can come back. */
export interface ReturnReason { id: string, label: string, fields: readonly CompletableField[], needed: readonly CompletableField[], /** a free answer is asked */ words?: boolean, /** a letter or picture is asked */ file?: boolean }

/** One list for every site, so that returned referrals can be counted by reason. What a referral must state: common practice, as in shared/schemas/referral.ts. */
export const returnReasons = [
  { id: 'question', label: 'The clinical question is missing or not clear', fields: ['clinicalQuestion'], needed: ['clinicalQuestion'] },
  { id: 'side', label: 'The side or place is missing or contradicts the text', fields: ['side', 'bodySite'], needed: ['side'] },
  { id: 'symptoms', label: 'Symptoms or their onset are missing', fields: ['symptoms', 'onset'], needed: ['symptoms'] },
  { id: 'examination', label: 'The examination is missing', fields: ['examination'], needed: ['examination'] },
  { id: 'diagnosis', label: 'The provisional diagnosis is missing', fields: ['provisionalDiagnosis'], needed: ['provisionalDiagnosis'] },
  { id: 'cautions', label: 'Devices, leads, medicines or other cautions are not stated', fields: ['cautions'], needed: ['cautions'] },
  { id: 'urgency', label: 'It is not said why it is urgent', fields: ['urgencyReason'], needed: ['urgencyReason'] },
  { id: 'previous', label: 'Earlier studies, surgery or imaging are not stated', fields: ['previousStudies'], needed: ['previousStudies'] },
  { id: 'letter', label: 'A letter or result is missing', fields: [], needed: [], file: true },
  { id: 'consent', label: 'Consent to the report by e-mail is not stated', fields: ['consentElectronic'], needed: ['consentElectronic'] },
  { id: 'other', label: 'Another question', fields: [], needed: [], words: true },
] as const satisfies readonly ReturnReason[]
export type ReturnReasonId = (typeof returnReasons)[number]['id']
export const returnReasonIds = returnReasons.map(reason => reason.id) as [ReturnReasonId, ...ReturnReasonId[]]

export interface Asked { fields: CompletableField[], needed: CompletableField[], words: boolean, file: boolean, labels: string[] }

/**
 * What a list of reasons asks for, each once, in the order of the form.
 * @example askedBy(['side']).fields // => ['side', 'bodySite']
 */
export function askedBy(ids: readonly string[]): Asked {
  const chosen: ReturnReason[] = returnReasons.filter(reason => ids.includes(reason.id))
  const each = (pick: (reason: ReturnReason) => readonly CompletableField[]) => (Object.keys(completableFields) as CompletableField[]).filter(field => chosen.some(reason => pick(reason).includes(field)))
  return { fields: each(reason => reason.fields), needed: each(reason => reason.needed), words: chosen.some(reason => reason.words), file: chosen.some(reason => reason.file), labels: chosen.map(reason => reason.label) }
}

/** The reasons that what is missing before booking hints at: ticked at first when a referral is returned. @example reasonsFor(['side', 'cautions.cardiac-device']) // => ['side', 'cautions'] */
export function reasonsFor(missingPaths: readonly string[]): ReturnReasonId[] {
  const fields = missingPaths.map(path => path.split('.')[0])
  return returnReasons.filter(reason => (reason.needed as readonly string[]).some(field => fields.includes(field))).map(reason => reason.id)
}
