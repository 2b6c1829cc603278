import * as z from 'zod'
import { policyKind } from './kind'

/** Expanded uncertainties, k = 2 (about 95 %), of what is read off by hand. */
export const uncertaintySchema = z.object({
  distanceMm: z.number('Enter the uncertainty of a distance, in millimetres.').min(0, 'Enter 0 mm or more.').max(30, 'Enter at most 30 mm.'),
  latencyMs: z.number('Enter the uncertainty of a latency, in milliseconds.').min(0, 'Enter 0 ms or more.').max(2, 'Enter at most 2 ms.'),
})
export type UncertaintyPolicy = z.infer<typeof uncertaintySchema>

/** Defaults: common practice, no source; a laboratory measures its own. */
export const uncertainty = policyKind({
  label: 'Uncertainty',
  about: 'How far a measured distance and a cursor on a trace may be off, from which the ± of every velocity follows.',
  scope: 'site',
  schema: uncertaintySchema,
  initial: { distanceMm: 5, latencyMs: 0.1 },
})
