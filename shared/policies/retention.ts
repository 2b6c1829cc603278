import * as z from 'zod'
import { policyKind } from './kind'

const years = (least: number) => z.number('Enter the years.').int('Enter whole years.').min(least, `Enter ${least} years or more.`).max(100, 'Enter at most 100 years.')

/** How long records are kept after the last contact. A legal hold keeps a record however old it is. */
export const retentionSchema = z.object({
  /** After the last contact, for whoever was grown up then. */
  adultYears: years(1),
  /** After the last contact, for whoever was under 18 then. */
  childYears: years(1),
  /** Never before this birthday, for whoever was under 18 at the last contact. */
  childUntilAge: years(18),
})
export type RetentionPolicy = z.infer<typeof retentionSchema>

/**
 * The law differs by country and state: in the United States from 5 years to a minor's 30th birthday (published); in the
 * United Kingdom commonly 8 years for adults and longer for children (from memory). The numbers here are the longer ones.
 */
export const retention = policyKind({
  label: 'Retention',
  about: 'How long records are kept after the last contact; children separately.',
  scope: 'organisation',
  schema: retentionSchema,
  initial: { adultYears: 10, childYears: 10, childUntilAge: 30 },
})
