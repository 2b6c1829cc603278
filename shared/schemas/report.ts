import * as z from 'zod'
import { idSchema, sideSchema } from './common'
import { correctionSchema } from '../report/corrections'
import type { Assessment, Policy } from '../calculations/types'
import type { Technique } from '../catalogue/types'
import type { ReportStatus, StudyState } from '../states'
import type { ReferralInput, Urgency, RouteNode } from './referral'
import type { PatientBand, PatientView } from './patient'
import type { ReportBench } from './bench-day'
import type { Study } from './study'

/** One line of the impression. Nerve or pattern, side and degree are fields beside the words (wrong-side rule). */
export const impressionLineSchema = z.object({
  id: idSchema,
  words: z.string().trim().max(1000),
  /** Nerve id of the catalogue, or null. */
  nerve: z.string().max(60).nullable().default(null),
  pattern: z.string().max(80).nullable().default(null),
  side: z.enum(['right', 'left', 'both']).nullable().default(null),
  degree: z.string().max(60).nullable().default(null),
  /** Does the line call it abnormal? null: not said. */
  abnormal: z.boolean().nullable().default(null),
  /** The organisation's phrase that the line began from, with its version ("median-wrist@3"); the words may have been changed since. */
  phrase: z.string().max(80).nullable().optional(),
})
export type ImpressionLine = z.infer<typeof impressionLineSchema>

/** An edited draft sentence: kept when its row changes, and marked. */
export const editedFindingSchema = z.object({ key: z.string().max(200), text: z.string().max(2000), fingerprint: z.string().max(200), left: z.boolean().default(false) })

export const meanings = ['I reviewed the data and interpret them as above.', 'I reviewed the technical data; this report holds no clinical interpretation.'] as const

export const reportDraftSchema = z.object({
  history: z.string().max(4000).default(''),
  examination: z.string().max(4000).default(''),
  editedFindings: z.array(editedFindingSchema).max(200).default([]),
  impression: z.array(impressionLineSchema).max(20).default([]),
  correlation: z.string().max(4000).default(''),
  limitations: z.array(z.string().trim().min(1).max(500)).max(20).default([]),
  recommendation: z.string().max(2000).default(''),
  /** Pre-sign questions answered with a reason: key of the question. */
  resolved: z.array(z.object({ key: z.string().max(200), reason: z.string().trim().min(3).max(500), /** what was answered, as `SignCheck.about` had it: a value that changed since asks again */ about: z.string().max(20).optional() })).max(100).default([]),
  /** Runs recorded cold that the reader interprets, with the reason that is printed. */
  interpretCold: z.array(z.object({ runId: idSchema, reason: z.string().trim().min(3).max(500) })).max(100).default([]),
  leaveOutEntrapmentSites: z.boolean().default(false),
  technicalOnly: z.boolean().default(false),
  promptContact: z.object({ who: z.string().max(200), at: z.string().max(40), means: z.string().max(100), readBack: z.boolean(), note: z.string().max(500) }).nullable().default(null),
})
export type ReportDraft = z.infer<typeof reportDraftSchema>
export const saveDraftSchema = z.object({ draft: reportDraftSchema, revision: z.number().int().min(0) })

/** One item of the check before signing. */
export interface SignCheck { key: string, strength: 'stop' | 'check' | 'ok', sentence: string, /** may it be answered with a reason, or must it be mended */ answerable: boolean, resolvedBecause?: string, runId?: string, /** fingerprint of the numbers it speaks of, where its key does not say them */ about?: string }

/** A phrase of the organisation for this study. `fits`: its conditions are met, and `because` says by what. Never chosen beforehand. */
export interface PhraseSuggestion { id: string, key: string, words: string, side: ImpressionLine['side'], nerve: string | null, pattern: string | null, abnormal: boolean | null, fits: boolean, because: string }

export const signSchema = z.object({
  password: z.string().min(1, 'Enter your password.').max(1024),
  meaning: z.enum(meanings),
  draftRevision: z.number().int(),
  /** Fingerprint of the study the check was made on: a changed row refuses. */
  fingerprint: z.string(),
})
/** POST /api/studies/:id/ready: what was looked at, as for a signature. */
export const readySchema = signSchema.pick({ draftRevision: true, fingerprint: true }).partial().default({})
/** Which version; the latest where it is left out. */
export const versionQuerySchema = z.object({ version: z.coerce.number().int().min(1).optional() })
export type SignInput = z.infer<typeof signSchema>

/** `replaces`: the version that the signer had before them; one that was signed meanwhile refuses. */
export const newVersionSchema = z.object({ replaces: z.number().int().min(1).optional(), kind: z.enum(['appended', 'amended', 'corrected', 'entered-in-error']), reason: z.string().trim().min(3, 'Say what changed and why.').max(1000), draft: reportDraftSchema.optional(), /** of values, for a correction only */ corrections: z.array(correctionSchema).max(200).default([]), /** where an entry in error belongs: the values are put there, to be read and signed anew */ rightReferralId: idSchema.optional(), password: z.string().min(1, 'Enter your password.').max(1024), meaning: z.enum(meanings) })

export interface ReadingRow {
  studyId: string
  number: string
  patientName: string
  birthDate: string
  recordNumber: string
  question: string
  urgency: Urgency
  state: StudyState
  handedOverAt: string | null
  stateSince: string
  siteId: string
  siteName: string
  readerId: string | null
  readerName: string | null
  flagged: number
  hasDraft: boolean
  /** Marked ready to sign: written in training, for a supervisor, or for later. */
  ready: boolean
  /** Where the reader is away today: until when, and who covers. */
  away: { toDay: string, coveredBy: string, coveredByName: string } | null
}

/** GET /api/studies/:id/reading, beside the StudyView. */
export interface ReadingView {
  reportId: string | null
  number: string | null
  draft: ReportDraft
  draftRevision: number
  /** Draft sentences as made now from the rows, merged with the edited ones. */
  findings: { key: string, runIds: string[], text: string, edited: boolean, needsReview: boolean, left: boolean }[]
  checks: SignCheck[]
  fingerprint: string
  readyToSign: boolean
  phrases: PhraseSuggestion[]
  /** Findings that call for prompt contact by the organisation's list, and those of them that are found here. */
  promptContact: { list: string[], found: { id: string, label: string, because: string }[] }
  versions: { id: string, version: number, status: ReportStatus, signedAt: string, signedName: string }[]
  namesakes: { recordNumber: string, name: string, birthDate: string }[]
  /** Who would receive a version signed now: the referring physician, the copies, or everyone who had an earlier version. */
  /** `namesakes`: where in the directory others of that name are, "Chapel Row Medical Centre, Osterleigh". */
  recipients?: { name: string, practiceName: string, town: string, namesakes: string[] }[]
  /** The study judged with the reader's own choices (cold runs interpreted), beside earlier studies, its sentences in the report's language; left out where that changes nothing. */
  assessment?: Assessment
}

/** One difference between a version and the one before it. */
export interface ReportChange { what: string, before: string, after: string }

/** What a signature freezes: canonical JSON of this is hashed. Shown for ever from this copy. */
export const SNAPSHOT_FORMAT = 'orthodrome-report/1'
export interface ReportSnapshot {
  format: typeof SNAPSHOT_FORMAT
  demonstration: boolean
  number: string
  version: number
  status: Exclude<ReportStatus, 'preliminary' | 'cancelled'>
  reason: string
  supersedes: { version: number, sha256: string } | null
  organisation: { name: string, disclaimer: string, /** in the language of the report, where the organisation worded it */ disclaimerTranslated?: string, paperSize: 'A4' | 'LETTER', timeZone: string }
  site: { name: string, town: string, address: string, phone: string, timeZone: string }
  language: string
  patient: Pick<PatientView, 'id' | 'recordNumber' | 'familyName' | 'givenName' | 'birthDate' | 'sexForLimits'>
  referral: Pick<ReferralInput, 'clinicalQuestion' | 'side' | 'symptoms' | 'onset' | 'examination' | 'provisionalDiagnosis' | 'urgency'> & { number: string, receivedAt: string | null, cautions: string[], physician: { name: string, practiceName: string, town: string } | null, copies: { name: string, practiceName: string, town: string }[] }
  study: Study
  studyNumber: string
  startedAt: string | null
  technologist: string
  handOverNote: string
  /** Circumstances of the recording; left out in copies that were signed before they were kept. */
  bench?: ReportBench
  needleExamination: string
  policy: Policy
  assessment: Assessment
  /** The catalogue entries of the study's runs as they were: labels of sites may change later, the signed copy keeps these. */
  techniques: Technique[]
  findings: { key: string, runIds: string[], text: string, edited: boolean }[]
  draft: ReportDraft
  /** Questions of the check before signing that the reader answered, with the words of the question as it stood. */
  resolvedChecks: { key: string, sentence: string, reason: string }[]
  /** Against the version before, item by item. */
  changes: ReportChange[]
  /** Who wrote the draft, where it was someone else than the signer. */
  draftedBy: string
  signature: { userId: string, name: string, credentials: string, meaning: string, at: string, timeZone: string }
}

/** GET /api/reports/:id?version= : the web page of a signed version, and its PDF beside it. */
export interface ReportView {
  reportId: string
  number: string
  version: number
  status: ReportStatus
  snapshot: ReportSnapshot
  sha256: string
  /** The head of the audit trail at the signature, as printed. */
  auditHead: string
  pdfSha256: string | null
  superseded: boolean
  versions: { version: number, status: ReportStatus, signedAt: string, signedName: string, reason: string }[]
  band: PatientBand
  route: RouteNode[]
}
export const sideWords = { right: 'RIGHT', left: 'LEFT' } as const
export { sideSchema }

/** A copy of a signed version for the patient. */
export const patientCopySchema = z.object({ version: z.number().int().min(1), handedTo: z.string().trim().min(3, 'Say how the identity was checked, for example by a passport.').max(200) })
