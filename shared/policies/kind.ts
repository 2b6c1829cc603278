import type * as z from 'zod'

/**
 * A rule of the organisation that one person proposes and another, a medical director, approves, with a first day.
 * `scope` says whether every site has one of its own or the organisation one for all.
 */
export interface PolicyKind<S extends z.ZodType = z.ZodType> {
  label: string
  /** What it decides, in one sentence, as the shelf shows it. */
  about: string
  scope: 'site' | 'organisation'
  schema: S
  /** What holds until somebody approved another: version 0. */
  initial: z.output<S>
}

export function policyKind<S extends z.ZodType>(kind: PolicyKind<S>): PolicyKind<S> {
  return kind
}
