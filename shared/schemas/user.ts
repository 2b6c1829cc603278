import * as z from 'zod'
import { roles, type Role } from '../permissions'
import { isoDateSchema, pageQuerySchema } from './common'

/** Who is signed in, as every page knows it: GET /api/me. */
export interface SessionUser {
  id: string
  email: string
  name: string
  printedName: string
  credentials: string
  /** A mail proved the address: needed to be the second of two people. */
  emailConfirmed: boolean
  holdings: { siteId: string, siteName: string, role: Role }[]
  sites: { id: string, name: string, town: string, timeZone: string }[]
  secondFactor: boolean
  /** Writes reports; a supervisor signs them. */
  inTraining: boolean
  /** Signers without a second factor can do nothing but set one up. */
  mustEnrol: boolean
  demonstration: boolean
  idleMinutes: number
  openTasks: number
  /** Where the audit trail stood when this was read: what happens later is told by the event stream. */
  changesUpTo: number
}

export const signInSchema = z.object({
  email: z.string().trim().min(1, 'Enter your e-mail address.').max(200),
  password: z.string().min(1, 'Enter your password.').max(1024),
  code: z.string().trim().max(40).default(''),
})

/** Length counts code points after NFC; the blocklist is checked on the server. Source: NIST SP 800-63B-4, 3.1.1.2 (draft read). */
export const passwordSchema = z.string().max(1024)
export const changePasswordSchema = z.object({ currentPassword: z.string().min(1, 'Enter your present password.').max(1024), newPassword: passwordSchema, endOtherSessions: z.boolean().default(true) })
export const firstAdministratorSchema = z.object({
  token: z.string().min(20).max(200),
  organisationName: z.string().trim().min(2, 'Enter the name of the organisation.').max(120),
  siteName: z.string().trim().min(2, 'Enter the name of the first site.').max(120),
  town: z.string().trim().min(2, 'Enter the town.').max(120),
  timeZone: z.string().trim().min(2).max(60).default('Europe/Prague'),
  name: z.string().trim().min(2, 'Enter your name.').max(120),
  email: z.email('Enter an e-mail address, for example name@clinic.example.').max(200),
  password: passwordSchema,
})
export const totpEnrolSchema = z.object({
  password: z.string().min(1, 'Enter your password.').max(1024),
  code: z.string().trim().regex(/^\d{6}$/, 'Enter the six digits of the code.'),
  /** When a second factor exists already: a code of it, or a recovery code. */
  currentCode: z.string().trim().max(40).default(''),
})
export interface TotpStart { secret: string, uri: string, qrSvg: string }
export const profileSchema = z.object({ printedName: z.string().trim().max(120).optional(), credentials: z.string().trim().max(120).optional() })
export const setPasswordSchema = z.object({ token: z.string().min(20).max(200), password: passwordSchema })
export const setUpLinkSchema = z.object({ resetSecondFactor: z.boolean().default(false), byMail: z.boolean().default(false) })
/** The link is shown once, or mailed; for who signs or approves a second person has to ask as well (`waiting`). */
export type SetUpLinkAnswer = { waiting: false, link: string, mailedTo: null, expiresAt: string } | { waiting: false, link: null, mailedTo: string, expiresAt: string } | { waiting: true }
export const forgottenPasswordSchema = z.object({ email: z.email('Enter an e-mail address, for example name@clinic.example.').max(200) })
export const ownAddressSchema = z.object({ email: z.email('Enter an e-mail address, for example name@clinic.example.').max(200), password: z.string().min(1, 'Enter your password.').max(1024) })
export const ownAddressCodeSchema = z.object({ code: z.string().trim().min(8, 'Enter the whole code.').max(40) })

/** One line of the ledger: the trail of acts, or the record of who looked at what. */
export const ledgerQuerySchema = pageQuerySchema.extend({
  chain: z.enum(['acts', 'views']).default('acts'), actor: z.string().max(64).optional(), patient: z.string().max(64).optional(),
  subject: z.string().max(64).optional(), subjectId: z.string().max(200).optional(), name: z.string().max(80).optional(), siteId: z.string().max(64).optional(),
  /** Days of the organisation's calendar, both included. */
  from: isoDateSchema.optional(), to: isoDateSchema.optional(),
  /** The number of a patient, referral, study or report, as it is printed. */
  number: z.string().trim().max(40).optional(),
})
export const ledgerExportSchema = ledgerQuerySchema.omit({ page: true, pageSize: true })
export interface LedgerRow { seq: number, at: string, actor: string, name: string, sentence: string, subject: string, subjectId: string, siteName: string | null }
/** The whole list as rows for a spreadsheet; `left` says how many more there are than one file takes. */
export interface LedgerExport { head: string[], rows: string[][], left: number }
/** Who saw and did what with one patient's record, at every site, for the patient. */
export interface AccessReport {
  recordNumber: string
  name: string
  birthDate: string
  organisation: string
  madeAt: string
  madeBy: string
  entries: { at: string, who: string, what: string, siteName: string | null }[]
}
export const accessReportSchema = z.object({ number: z.string().trim().min(3, 'Enter the record number.').max(40), handedTo: z.string().trim().min(3, 'Say who gets it and how the identity was checked.').max(200) })
/** What a check of one chain found; `problems` say where and what, at most twenty. */
export interface ChainCheck { links: number, intact: boolean, problems: string[] }
/** Every signed version and stored PDF against its hash and the trail; `altered` names each that no longer fits. */
export interface ReportsCheck { versions: number, pdfs: number, altered: { reportId: string, number: string, version: number, because: string }[] }
export interface LedgerCheck { at: string, acts: ChainCheck, views: ChainCheck, head: string, reports: ReportsCheck }

export const personSchema = z.object({
  email: z.email('Enter an e-mail address, for example name@clinic.example.').max(200),
  name: z.string().trim().min(2, 'Enter the name.').max(120),
  printedName: z.string().trim().max(120).default(''),
  credentials: z.string().trim().max(120).default(''),
  inTraining: z.boolean().default(false),
  /** `endsOn` is the first day without the role; null: no end. Left out: from today on, or as it stands. */
  holdings: z.array(z.object({ siteId: z.string(), role: z.enum(roles), startsOn: isoDateSchema.nullish(), endsOn: isoDateSchema.nullish() })).max(60).default([]),
})
/** PATCH: only what is given changes. Written out, because a partial schema would still fill in the defaults. */
export const personChangesSchema = z.object({
  email: personSchema.shape.email.optional(),
  name: personSchema.shape.name.optional(),
  printedName: z.string().trim().max(120).optional(),
  credentials: z.string().trim().max(120).optional(),
  inTraining: z.boolean().optional(),
  holdings: personSchema.shape.holdings.unwrap().optional(),
})
export interface HoldingRow { siteId: string, siteName: string, role: Role, startsOn: string, endsOn: string | null, /** it counts today */ inForce: boolean }
export interface PersonRow {
  id: string
  email: string
  emailConfirmed: boolean
  name: string
  printedName: string
  credentials: string
  inTraining: boolean
  /** Roles of today and of later days, at the asker's sites. */
  holdings: HoldingRow[]
  secondFactor: boolean
  lastSeenAt: string | null
  deactivated: boolean
  hasPassword: boolean
}
/** A role that waits for a second person. */
export interface RoleProposalRow {
  id: string
  userId: string
  name: string
  role: Role
  siteId: string
  siteName: string
  proposedByName: string
  proposedAt: string
  startsOn: string
  endsOn: string | null
  /** The asker proposed it. */
  mine: boolean
  /** Nobody else is left to agree: from this moment on the proposer confirms it alone. */
  aloneFrom: string | null
}
export const decisionSchema = z.object({ approve: z.boolean() })
export interface SiteBasics { id: string, name: string, town: string, address: string, phone: string, timeZone: string, rooms: string[] }
/** With what the site's policies say today. */
export interface SiteView extends SiteBasics { handMinimumC: number, footMinimumC: number, distanceUncertaintyMm: number, latencyUncertaintyMs: number }
export const siteSchema = z.object({ name: z.string().trim().min(2, 'Enter the name.').max(120), town: z.string().trim().min(2, 'Enter the town.').max(120), address: z.string().trim().max(200).default(''), phone: z.string().trim().max(40).default(''), timeZone: z.string().trim().min(2).max(60), rooms: z.array(z.string().trim().min(1).max(60)).min(1, 'Name at least one room.').max(40) })
export const siteChangesSchema = z.object({
  name: siteSchema.shape.name.optional(),
  town: siteSchema.shape.town.optional(),
  address: siteSchema.shape.address.unwrap().optional(),
  phone: siteSchema.shape.phone.unwrap().optional(),
  timeZone: siteSchema.shape.timeZone.optional(),
  rooms: siteSchema.shape.rooms.optional(),
})
export interface SessionRow { id: string, createdAt: string, lastUsedAt: string, agent: string, current: boolean }
