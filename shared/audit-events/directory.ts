import * as z from 'zod'
import { changedFields, changes, event, nothing } from './kind'

/** Practices and physicians: who is in the directory, how their address was checked, what opens their PDFs. Never a code or a passphrase. */
export const directoryEvents = {
  'practice.added': event(nothing, () => 'added a practice'),
  'practice.changed': event(changes, data => `changed a practice: ${changedFields(data)}`),
  'practice.passphrase-made': event(z.object({ replaced: z.boolean() }), data => data.replaced ? 'replaced the passphrase of a practice' : 'made the passphrase of a practice'),
  'practice.passphrase-handed-over': event(z.object({ by: z.string(), on: z.string() }), data => `handed over the passphrase of a practice (${data.by}, ${data.on})`),
  'practice.closed': event(z.object({ reason: z.string() }), data => `closed a practice: ${data.reason}`),
  'practice.reopened': event(nothing, () => 'opened a practice again'),
  'practice.delegate-added': event(z.object({ delegateId: z.string() }), () => 'named somebody who may collect for a practice'),
  'practice.delegate-ended': event(z.object({ delegateId: z.string() }), () => 'ended that somebody may collect for a practice'),
  'physician.merged': event(z.object({ into: z.string(), referrals: z.number().int() }), data => `merged a physician of the directory with another entry, ${data.referrals} referrals moved along`),
  'physician.added': event(z.object({ practiceId: z.string() }), () => 'added a physician to the directory'),
  'physician.changed': event(changes, data => `changed a physician of the directory: ${changedFields(data)}`),
  'physician.code-sent': event(z.object({ mailId: z.string() }), () => 'sent a code to an address of the directory'),
  'physician.code-refused': event(z.object({ because: z.string() }), data => `a code for an address was refused: ${data.because}`),
  'physician.address-verified': event(z.object({ by: z.enum(['code', 'other']), reason: z.string().default('') }), data => data.by === 'code' ? 'verified an address by the code that was mailed to it' : `verified an address another way: ${data.reason}`),
  'physician.access-given': event(z.object({ userId: z.string(), newAccount: z.boolean() }), data => `gave a physician access to the desk${data.newAccount ? '' : ', with the account that has this address'}`),
  'physician.access-ended': event(z.object({ userId: z.string() }), () => 'ended a physician\'s access to the desk'),
} as const
