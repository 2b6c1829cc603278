import * as z from 'zod'
import { event } from './kind'

const adoption = z.object({ setId: z.string(), setVersion: z.number().int() })
const words = (data: z.output<typeof adoption>) => `${data.setId}, version ${data.setVersion}`

/** Reference sets: who wanted one in use, who approved it, which rows were compared with the paper. */
export const shelfEvents = {
  'shelf.adoption-proposed': event(adoption.extend({ techniques: z.array(z.string()).nullable(), effectiveOn: z.string() }), data => `proposed the reference set ${words(data)}, from ${data.effectiveOn} on`),
  'shelf.adoption-approved': event(adoption.extend({ effectiveOn: z.string() }), data => `approved the reference set ${words(data)}, from ${data.effectiveOn} on`),
  'shelf.adoption-ended': event(adoption.extend({ endedOn: z.string() }), data => `ended the use of the reference set ${words(data)} on ${data.endedOn}`),
  'shelf.rows-checked': event(adoption.extend({ rowIds: z.array(z.string()) }), data => `compared ${data.rowIds.length} rows of the reference set ${words(data)} with the paper`),
}
