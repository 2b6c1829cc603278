import * as z from 'zod'
import { event } from './kind'

const adoption = z.object({ setId: z.string(), setVersion: z.number().int() })
const words = (data: z.output<typeof adoption>) => `${data.setId}, version ${data.setVersion}`
const policy = z.object({ policy: z.string(), version: z.number().int(), effectiveOn: z.string() })
const policyWords = (data: z.output<typeof policy>) => `the policy ${data.policy}, version ${data.version}`

/** Reference sets: who wanted one in use, who approved it, which rows were compared with the paper. */
export const shelfEvents = {
  'shelf.adoption-proposed': event(adoption.extend({ techniques: z.array(z.string()).nullable(), effectiveOn: z.string() }), data => `proposed the reference set ${words(data)}, from ${data.effectiveOn} on`),
  'shelf.adoption-approved': event(adoption.extend({ effectiveOn: z.string() }), data => `approved the reference set ${words(data)}, from ${data.effectiveOn} on`),
  'shelf.adoption-ended': event(adoption.extend({ endedOn: z.string() }), data => `ended the use of the reference set ${words(data)} on ${data.endedOn}`),
  'shelf.set-imported': event(adoption.extend({ rows: z.number().int(), sha256: z.string() }), data => `imported the reference set ${words(data)}, with ${data.rows} rows`),
  'shelf.rows-checked': event(adoption.extend({ rowIds: z.array(z.string()) }), data => `compared ${data.rowIds.length} rows of the reference set ${words(data)} with the paper`),

  // Policies: rules of the organisation that two persons put in force
  'policy.proposed': event(policy, data => `proposed ${policyWords(data)}, from ${data.effectiveOn} on`),
  'policy.approved': event(policy, data => `approved ${policyWords(data)}, from ${data.effectiveOn} on`),
  'policy.withdrawn': event(policy, data => `took back the proposal of ${policyWords(data)}`),
}
