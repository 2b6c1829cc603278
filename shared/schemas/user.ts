import * as z from 'zod'
import { roles, type Role } from '../permissions'
import { pageQuerySchema } from './common'

/** Who is signed in, as every page knows it: GET /api/me. */
export interface SessionUser {
  id: string
  email: string
  name: string
  printedName: string
  credentials: string
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
export const setUpLinkSchema = z.object({ resetSecondFactor: z.boolean().default(false) })
/** The link is shown once; for a signer a second person has to ask as well (`waiting`). */
export type SetUpLinkAnswer = { waiting: false, link: string, expiresAt: string } | { waiting: true }

/** One line of the ledger: the trail of acts, or the record of who looked at what. */
export const ledgerQuerySchema = pageQuerySchema.extend({
  chain: z.enum(['acts', 'views']).default('acts'), actor: z.string().max(64).optional(), patient: z.string().max(64).optional(),
  subject: z.string().max(64).optional(), subjectId: z.string().max(200).optional(), name: z.string().max(80).optional(), siteId: z.string().max(64).optional(),
})
export interface LedgerRow { seq: number, at: string, actor: string, name: string, sentence: string, subject: string, subjectId: string, siteName: string | null }
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
  holdings: z.array(z.object({ siteId: z.string(), role: z.enum(roles) })).max(60).default([]),
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
export interface PersonRow { id: string, email: string, name: string, printedName: string, credentials: string, inTraining: boolean, holdings: { siteId: string, siteName: string, role: Role }[], secondFactor: boolean, lastSeenAt: string | null, deactivated: boolean, hasPassword: boolean }
export interface SiteView { id: string, name: string, town: string, address: string, phone: string, timeZone: string, handMinimumC: number, footMinimumC: number, distanceUncertaintyMm: number, latencyUncertaintyMs: number, rooms: string[] }
export const siteSchema = z.object({ name: z.string().trim().min(2, 'Enter the name.').max(120), town: z.string().trim().min(2, 'Enter the town.').max(120), address: z.string().trim().max(200).default(''), phone: z.string().trim().max(40).default(''), timeZone: z.string().trim().min(2).max(60), handMinimumC: z.coerce.number().min(20).max(37).default(32), footMinimumC: z.coerce.number().min(20).max(37).default(30), distanceUncertaintyMm: z.coerce.number().min(0).max(30).default(5), latencyUncertaintyMs: z.coerce.number().min(0).max(2).default(0.1), rooms: z.array(z.string().trim().min(1).max(60)).min(1, 'Name at least one room.').max(40) })
export const siteChangesSchema = z.object({
  name: siteSchema.shape.name.optional(),
  town: siteSchema.shape.town.optional(),
  address: siteSchema.shape.address.unwrap().optional(),
  phone: siteSchema.shape.phone.unwrap().optional(),
  timeZone: siteSchema.shape.timeZone.optional(),
  handMinimumC: siteSchema.shape.handMinimumC.unwrap().optional(),
  footMinimumC: siteSchema.shape.footMinimumC.unwrap().optional(),
  distanceUncertaintyMm: siteSchema.shape.distanceUncertaintyMm.unwrap().optional(),
  latencyUncertaintyMs: siteSchema.shape.latencyUncertaintyMs.unwrap().optional(),
  rooms: siteSchema.shape.rooms.optional(),
})
export interface SessionRow { id: string, createdAt: string, lastUsedAt: string, agent: string, current: boolean }
