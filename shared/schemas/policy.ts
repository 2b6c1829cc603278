import * as z from 'zod'
import { policyNames } from '../policies/index'
import { idSchema, isoDateSchema } from './common'

export const policyNameSchema = z.enum(policyNames)
export const policyQuerySchema = z.object({ siteId: idSchema.optional() })

export const policyProposalSchema = z.object({
  name: policyNameSchema,
  /** Needed for a policy that each site has of its own. */
  siteId: idSchema.nullable().default(null),
  body: z.unknown(),
  note: z.string().trim().min(1, 'Say what changes and why.').max(500, 'Say it in 500 letters at most.'),
  effectiveOn: isoDateSchema,
})

export interface PolicyVersionView {
  id: string
  version: number
  body: unknown
  note: string
  proposedById: string
  proposedBy: string
  proposedAt: string
  approvedBy: string | null
  approvedAt: string | null
  effectiveOn: string
  withdrawnAt: string | null
}
/** GET /api/policies/:name */
export interface PolicyView {
  name: string
  label: string
  about: string
  scope: 'site' | 'organisation'
  /** What holds today; version 0 is what the program comes with. */
  inForce: { version: number, body: unknown, effectiveOn: string | null }
  versions: PolicyVersionView[]
}
