import * as z from 'zod'

/** What a column of a file can hold; the people who import say which column is which. */
export const importFields = ['familyName', 'givenName', 'birthDate', 'sexForLimits', 'identifier', 'phone', 'physicianEmail', 'clinicalQuestion', 'side', 'symptoms', 'examination', 'provisionalDiagnosis', 'urgency', 'urgencyReason'] as const
export type ImportField = (typeof importFields)[number]
export const importFieldLabels: Record<ImportField, string> = {
  familyName: 'Family name', givenName: 'Given name', birthDate: 'Date of birth, as year-month-day', sexForLimits: 'Sex for limits: female or male', identifier: 'Other number', phone: 'Telephone', physicianEmail: 'E-mail of the referring physician, as in the directory',
  clinicalQuestion: 'Clinical question', side: 'Side: right, left, both or midline', symptoms: 'Symptoms', examination: 'Examination', provisionalDiagnosis: 'Provisional diagnosis', urgency: 'Urgency: routine, urgent or same-week', urgencyReason: 'Why urgent',
}
export const neededFields: readonly ImportField[] = ['familyName', 'givenName', 'birthDate']

export const referralImportSchema = z.object({
  siteId: z.string().min(1, 'Choose the site.').max(64),
  text: z.string().min(1, 'Choose a file.').max(1_000_000, 'The file is larger than 1 MB.'),
  /** Field to the name of its column; left out or blank: not in the file. */
  mapping: z.partialRecord(z.enum(importFields), z.string().max(120)).default({}),
  store: z.boolean(),
})

export interface ImportLine {
  line: number
  /** "Novak, Jana, born 1974-03-14": for the eyes of the person who imports. */
  patient: string
  /** What will happen with the patient. */
  patientWill: 'new record' | 'known record' | 'stopped'
  recordNumber: string | null
  errors: { field: ImportField, message: string }[]
  /** Namesakes that are not taken for the same person. */
  notes: string[]
}
export interface ReferralImportAnswer { columns: string[], mapping: Partial<Record<ImportField, string>>, lines: ImportLine[], stored: number }
