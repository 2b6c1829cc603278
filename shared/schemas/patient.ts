import * as z from 'zod'
import { isoDateSchema, limitSexes, pageQuerySchema, type LimitSex } from './common'

/** '' or one plain mailbox: appointments go there, so it has to be one that a mail can be sent to. */
const patientEmail = z.union([z.literal(''), z.string().trim().max(200).regex(/^[^\s<>,;:"()[\]\\@]+@[^\s<>,;:"()[\]\\@]+\.[^\s<>,;:"()[\]\\@]+$/, 'Enter an e-mail address, for example name@mail.example.')])
export const mailConsents = ['yes', 'no', 'not-asked'] as const

export const patientSchema = z.object({
  familyName: z.string().trim().min(1, 'Enter the family name.').max(80),
  givenName: z.string().trim().min(1, 'Enter the given name.').max(80),
  birthDate: isoDateSchema,
  /** Sex for limits: kept apart from gender, may be unknown; limits banded by sex then read "not judged: sex missing". */
  sexForLimits: z.enum(limitSexes).nullable().default(null),
  gender: z.string().trim().max(40).default(''),
  /** A number from elsewhere (national, insurance). */
  identifier: z.string().trim().max(40).default(''),
  phone: z.string().trim().max(40).default(''),
  email: patientEmail.default(''),
  /** May date and place of appointments be mailed there? Nothing medical ever is. */
  mailConsent: z.enum(mailConsents).default('not-asked'),
  interpreter: z.string().trim().max(80).default(''),
})
export type PatientInput = z.infer<typeof patientSchema>

/** PATCH /api/patients/:id: only what changes, and the revision the form was filled from. What is left out stays as it is. */
export const changePatientSchema = z.object({
  revision: z.number().int().min(1),
  familyName: patientSchema.shape.familyName.optional(),
  givenName: patientSchema.shape.givenName.optional(),
  birthDate: isoDateSchema.optional(),
  sexForLimits: z.enum(limitSexes).nullable().optional(),
  gender: z.string().trim().max(40).optional(),
  identifier: z.string().trim().max(40).optional(),
  phone: z.string().trim().max(40).optional(),
  email: patientEmail.optional(),
  mailConsent: z.enum(mailConsents).optional(),
  interpreter: z.string().trim().max(80).optional(),
})
export type PatientChange = z.infer<typeof changePatientSchema>

export interface PatientView extends PatientInput { id: string, recordNumber: string, sexForLimits: LimitSex | null, revision: number }

/** GET /api/patients: search by words (name, number, birth date), accents folded. */
export const patientSearchSchema = pageQuerySchema.extend({ search: z.string().max(200).default('') })

/** GET /api/patients/namesakes: possible same person, shown before a new record is made. */
export const namesakeQuerySchema = z.object({ familyName: z.string().max(80), givenName: z.string().max(80), birthDate: z.string().max(10).default(''), exceptId: z.string().max(64).optional() })
export interface Namesake { patient: PatientView, because: string, strength: 'likely-same' | 'same-name' | 'same-birth-date' }

/** The band on every page of a patient. */
export interface PatientBand {
  patientId: string
  familyName: string
  givenName: string
  birthDate: string
  ageYears: number
  recordNumber: string
  sexForLimits: LimitSex | null
  heightCm: number | null
  question: string
  side: 'right' | 'left' | 'both' | 'midline' | null
  /** Cautions that were answered yes, in words; `asked` false while any is not asked. */
  cautions: string[]
  cautionsAsked: boolean
  namesakes: number
}
