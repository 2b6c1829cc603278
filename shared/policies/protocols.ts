import * as z from 'zod'
import { techniqueOf } from '../catalogue/nerves'
import { protocols as shipped } from '../protocols'
import { policyKind } from './kind'

export const plannedSides = ['asked', 'both'] as const

const runSchema = z.object({
  technique: z.string().min(1, 'Choose the nerve and technique.').max(64).refine(id => techniqueOf(id) !== undefined, 'Choose a technique of the catalogue.'),
  /** Each side that the referral asks for, or both sides. */
  side: z.enum(plannedSides, 'Choose the sides.'),
})

const protocolSchema = z.object({
  id: z.string().regex(/^[a-z0-9-]{2,40}$/, 'The short name has small letters, digits and hyphens.'),
  label: z.string().trim().min(2, 'Enter the clinical question.').max(80),
  /** Why these runs: the publication, or "common practice". */
  basis: z.string().trim().min(3, 'Say on what the protocol rests: a publication, or common practice.').max(600),
  runs: z.array(runSchema).min(1, 'Add at least one run.').max(60),
})

/** The same twice would lay out a run twice, or leave unsaid which of two protocols was meant. */
function refuseTwice(items: readonly string[], pathOf: (index: number) => (string | number)[], message: string, context: z.RefinementCtx): void {
  for (const [index, item] of items.entries()) if (items.indexOf(item) < index) context.addIssue({ code: 'custom', path: pathOf(index), message })
}

export const protocolsSchema = z.object({ protocols: z.array(protocolSchema).min(1, 'Add at least one protocol.').max(60) }).superRefine(({ protocols }, context) => {
  refuseTwice(protocols.map(protocol => protocol.id), index => ['protocols', index, 'id'], 'Another protocol has this short name.', context)
  refuseTwice(protocols.map(protocol => protocol.label.toLowerCase()), index => ['protocols', index, 'label'], 'Another protocol has this question.', context)
  for (const [number, protocol] of protocols.entries()) refuseTwice(protocol.runs.map(run => run.technique), index => ['protocols', number, 'runs', index, 'technique'], 'This run is planned already.', context)
})
export type ProtocolList = z.infer<typeof protocolsSchema>

/** Which runs each clinical question wants. The initial lists say their source; a laboratory sets its own. */
export const protocols = policyKind({
  label: 'Protocols',
  about: 'Which runs are laid out for each clinical question.',
  scope: 'organisation',
  schema: protocolsSchema,
  initial: { protocols: shipped },
})
