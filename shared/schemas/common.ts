import * as z from 'zod'

/** The two sides of a person. Shown as RIGHT / LEFT, RIGHT standing left as one faces a person. */
export const sides = ['right', 'left'] as const
export type Side = (typeof sides)[number]
export const sideSchema = z.enum(sides)

/** Where a referral asks to look. */
export const referralSides = ['right', 'left', 'both', 'midline'] as const
export type ReferralSide = (typeof referralSides)[number]

export const idSchema = z.string().min(1).max(64)

/** A calendar day, ISO 8601: 2026-12-02. */
export const isoDateSchema = z.iso.date('Enter the date as year-month-day, for example 2026-03-09.')

/** A moment, ISO 8601 with an offset or Z. */
export const isoDateTimeSchema = z.iso.datetime({ offset: true })

/** Sex as far as limits use it; gender is a field of its own and never used for limits. */
export const limitSexes = ['female', 'male'] as const
export type LimitSex = (typeof limitSexes)[number]

/** Every list route answers so: one page of rows and how many there are in all. */
export interface Page<T> {
  rows: T[]
  total: number
  page: number
  pageSize: number
}

/** What every list route takes in its address. */
export const pageQuerySchema = z.object({
  page: z.coerce.number().int().min(1).default(1),
  pageSize: z.coerce.number().int().min(1).max(200).default(50),
  sort: z.string().max(40).optional(),
  direction: z.enum(['asc', 'desc']).default('asc'),
  search: z.string().max(200).default(''),
})
export type PageQuery = z.infer<typeof pageQuerySchema>
