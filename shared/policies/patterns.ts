import * as z from 'zod'
import { patternSets } from '../calculations/patterns/all-sets'
import { policyKind } from './kind'

const known = new Set(patternSets.map(set => set.id))
const recalled = new Set(patternSets.filter(set => set.basis === 'memory').map(set => set.id))
const ids = z.array(z.string().refine(id => known.has(id), 'Choose sets of the list.')).max(200)

/** Sets of published criteria: those that rest on memory are off until they stand in `on`, the others on unless they stand in `off`. */
export const patternsSchema = z.object({
  on: ids.refine(list => list.every(id => recalled.has(id)), 'Only a set that rests on memory is turned on; the others are on by themselves.'),
  off: ids,
}).refine(body => !body.on.some(id => body.off.includes(id)), { path: ['off'], message: 'A set is either on or off.' })
export type PatternsPolicy = z.infer<typeof patternsSchema>

export const patterns = policyKind({
  label: 'Patterns',
  about: 'Which sets of published criteria are offered to the reader.',
  scope: 'site',
  schema: patternsSchema,
  initial: { on: [], off: [] },
})
