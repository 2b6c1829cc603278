import * as z from 'zod'
import { idSchema, isoDateSchema, pageQuerySchema } from './common'

export interface PhysicianView { id: string, name: string, title: string, email: string, emailVerified: boolean, practiceId: string, practiceName: string, town: string, deliveryMethod: 'encrypted-pdf' | 'collection-link', passphraseHandedOver: boolean, left: boolean, /** how many others share the name */ namesakes: number }
export const physicianSearchSchema = z.object({ search: z.string().max(120).default(''), page: z.coerce.number().int().min(1).default(1), pageSize: z.coerce.number().int().min(1).max(100).default(20) })

export const deliveryMethods = ['encrypted-pdf', 'collection-link'] as const
export const deliveryWords: Record<(typeof deliveryMethods)[number], string> = { 'encrypted-pdf': 'as an encrypted PDF attached to the mail', 'collection-link': 'by a link in the mail, under which they are collected' }
export const practiceSchema = z.object({
  name: z.string().trim().min(2, 'Enter the name of the practice.').max(120),
  town: z.string().trim().min(2, 'Enter the town: practices of one name are told apart by it.').max(120),
  address: z.string().trim().max(200).default(''),
  phone: z.string().trim().max(40).default(''),
  deliveryMethod: z.enum(deliveryMethods).default('encrypted-pdf'),
})
export type PracticeInput = z.output<typeof practiceSchema>
/** PATCH: only what is given changes. Written out, because a partial schema would still fill in the defaults. */
export const practiceChangesSchema = z.object({
  name: practiceSchema.shape.name.optional(),
  town: practiceSchema.shape.town.optional(),
  address: practiceSchema.shape.address.unwrap().optional(),
  phone: practiceSchema.shape.phone.unwrap().optional(),
  deliveryMethod: z.enum(deliveryMethods).optional(),
})
export type PracticeChanges = z.output<typeof practiceChangesSchema>

export const physicianSchema = z.object({
  name: z.string().trim().min(2, 'Enter the name.').max(120),
  title: z.string().trim().max(60).default(''),
  email: z.email('Enter an e-mail address, for example name@practice.example.').max(200),
  phone: z.string().trim().max(40).default(''),
})
export type PhysicianInput = z.output<typeof physicianSchema>
export const newPhysicianSchema = physicianSchema.extend({ practiceId: idSchema })
export const physicianChangesSchema = z.object({
  name: physicianSchema.shape.name.optional(),
  title: physicianSchema.shape.title.unwrap().optional(),
  email: physicianSchema.shape.email.optional(),
  phone: physicianSchema.shape.phone.unwrap().optional(),
  /** From this day on nothing is sent to them at this practice; null: they are (still) there. */
  leftOn: isoDateSchema.nullable().optional(),
})
export type PhysicianChanges = z.output<typeof physicianChangesSchema>
export const leavingSchema = z.object({ leftOn: isoDateSchema })

export const handOverMeans = ['telephone', 'letter', 'in-person'] as const
export type HandOverMeans = (typeof handOverMeans)[number]
export const handOverWords: Record<HandOverMeans, string> = { 'telephone': 'by telephone', 'letter': 'by letter', 'in-person': 'in person' }
export const passphraseHandOverSchema = z.object({ by: z.enum(handOverMeans, 'Choose how it was handed over.'), on: isoDateSchema, to: z.string().trim().max(120).default('') })

export const delegateSchema = z.object({
  name: z.string().trim().min(2, 'Enter the name.').max(120),
  duty: z.string().trim().max(120).default(''),
  phone: z.string().trim().max(40).default(''),
})
export type DelegateInput = z.output<typeof delegateSchema>
export interface DelegateView { id: string, name: string, duty: string, phone: string }
export const closeSchema = z.object({ reason: z.string().trim().min(3, 'Give the reason.').max(300) })
export const mergeSchema = z.object({ into: idSchema })

/** The code may be typed with or without its dash, in either case. */
export const addressCodeSchema = z.object({ code: z.string().trim().min(8, 'Enter the whole code.').max(40) })
export const addressCheckSchema = z.object({ reason: z.string().trim().min(10, 'Say who checked the address, how and when.').max(500) })
export const sendCodeSchema = z.object({ siteId: idSchema.optional() })
export const deskAccessSchema = z.object({ siteId: idSchema, byMail: z.boolean().default(true) })

export const practiceQuerySchema = pageQuerySchema.extend({
  /** 'to-do': a passphrase to hand over or an address to verify; 'same-name': somebody whose name stands in the directory twice. */
  show: z.enum(['all', 'to-do', 'same-name']).default('all'),
  pageSize: z.coerce.number().int().min(1).max(100).default(25),
})
export type PassphraseState = 'none' | 'made' | 'handed-over'
export interface PracticeRow {
  id: string
  name: string
  town: string
  phone: string
  deliveryMethod: (typeof deliveryMethods)[number]
  passphrase: PassphraseState
  closed: boolean
  physicians: { id: string, name: string, emailVerified: boolean, left: boolean }[]
}

export interface DirectoryNamesake { id: string, name: string, practiceId: string, practiceName: string, town: string, left: boolean }
export const directoryNamesakeQuerySchema = z.object({ name: z.string().max(120), exceptId: z.string().max(64).optional() })

/** The code on its way to an address; the code itself is known to the mail only. */
export interface OpenCode { sentAt: string, expiresAt: string, mail: 'waiting' | 'sent' | 'failed', triesLeft: number }

export interface PhysicianDetail {
  id: string
  name: string
  title: string
  email: string
  phone: string
  verified: { at: string, by: 'code' | 'other' | null, note: string } | null
  code: OpenCode | null
  leftOn: string | null
  left: boolean
  namesakes: DirectoryNamesake[]
  /** The account with which the desk is opened. */
  access: { userId: string, email: string, hasPassword: boolean, deactivated: boolean } | null
  /** Why a report signed now could not be mailed; '' when it can. */
  because: string
  /** Reports at the asker's sites that could not be mailed to this person. */
  waiting: number
}

export interface PracticeView {
  id: string
  name: string
  town: string
  address: string
  phone: string
  deliveryMethod: (typeof deliveryMethods)[number]
  closed: boolean
  passphrase: { state: PassphraseState, madeAt: string | null, handedOverOn: string | null, by: HandOverMeans | null, to: string }
  /** Who of the practice may be told the passphrase and collect, besides its physicians. */
  delegates: DelegateView[]
  /** Names of the sites whose reports go there. */
  usedBy: string[]
  /** False when an administrator of another site has to change what decides where reports go. */
  mayChange: boolean
  physicians: PhysicianDetail[]
}
/** Answered once, when it is made; afterwards it is sealed and nobody sees it again. */
export interface PassphraseAnswer { passphrase: string, madeAt: string }
/** Neither link nor mail when the account that has this address exists already and has a password. */
export interface DeskAccessAnswer { userId: string, link: string | null, mailedTo: string | null, expiresAt: string | null }
