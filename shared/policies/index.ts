import type * as z from 'zod'
import { clocks } from './clocks'
import { phrases } from './phrases'
import { promptContact } from './prompt-contact'
import { patterns } from './patterns'
import { reportForm } from './report-form'
import { retention } from './retention'
import { temperature } from './temperature'
import { uncertainty } from './uncertainty'
import { protocols } from './protocols'

/**
 * Every policy, one entry each. To add one: a file here with its schema and initial body, a line here, and an editor
 * `app/components/policy/<Kind>Editor.vue` listed in app/utils/policy-editors.ts.
 */
export const policies = {
  clocks,
  phrases,
  'prompt-contact': promptContact,
  temperature,
  uncertainty,
  patterns,
  'report-form': reportForm,
  retention,
  protocols,
} as const

export type PolicyName = keyof typeof policies
export type PolicyBody<N extends PolicyName> = z.output<(typeof policies)[N]['schema']>
export const policyNames = Object.keys(policies) as [PolicyName, ...PolicyName[]]

/** What was approved, or version 0, the initial body, before anything was. */
export interface PolicyInForce<N extends PolicyName> { version: number, body: PolicyBody<N>, effectiveOn: string | null }
