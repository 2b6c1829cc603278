import * as z from 'zod'
import { idSchema } from './common'

/** POST /api/referrals/bulk: one act on several referrals; `preview` says what would happen to whom and does nothing. */
export const bulkSchema = z.object({
  act: z.enum(['accept', 'reassign', 'remind']),
  ids: z.array(idSchema).min(1, 'Choose at least one referral.').max(100, 'Choose at most 100 referrals at once.'),
  protocol: z.string().max(80).default(''),
  ownerId: idSchema.nullable().default(null),
  preview: z.boolean(),
}).refine(body => body.act !== 'accept' || body.protocol !== '', { path: ['protocol'], message: 'Choose a protocol.' })
export type BulkInput = z.output<typeof bulkSchema>
/** One line for each referral: what will happen or happened, to whom; `ok` false where nothing does, with the reason. */
export interface BulkItem { id: string, number: string, who: string, ok: boolean, sentence: string }
