import * as z from 'zod'
import type { Assessment } from '../calculations/types'
import { idSchema } from '../schemas/common'
import type { ReportDraft } from '../schemas/report'
import { allConditions, conditionSchema } from './conditions'
import { policyKind } from './kind'

export const promptContactSchema = z.object({
  findings: z.array(z.object({
    id: idSchema,
    /** As the reader sees it: "Acute inflammatory neuropathy suspected". */
    label: z.string().trim().min(3, 'Name the finding.').max(200),
    /** What in a study asks about it; without any, and without words, it only stands in the list. */
    conditions: z.array(conditionSchema).max(6),
    /** Words of the impression that ask about it, each of them enough. */
    words: z.array(z.string().trim().min(3, 'Enter at least three letters.').max(60)).max(20).default([]),
  })).max(60, 'Keep at most 60 findings.'),
}).superRefine(({ findings }, context) => {
  for (const [index, finding] of findings.entries()) {
    if (findings.findIndex(other => other.id === finding.id) !== index) context.addIssue({ code: 'custom', path: ['findings', index, 'id'], message: 'Two findings have the same id.' })
  }
})
export type PromptContactList = z.infer<typeof promptContactSchema>

/** The list is common practice, no source: findings that lose by waiting for the mail. A laboratory sets its own. */
export const promptContact = policyKind({
  label: 'Findings that call for prompt contact',
  about: 'When one of them is found, the check before signing asks who was told, when and how. The program asks and does not decide.',
  scope: 'organisation',
  schema: promptContactSchema,
  initial: {
    findings: [
      { id: 'acute-neuropathy', label: 'Acute inflammatory neuropathy suspected', conditions: [], words: ['Guillain', 'acute inflammatory', 'GBS'] },
      { id: 'acute-neuropathy-criteria', label: 'Criteria for an acute demyelinating neuropathy are met', conditions: [{ kind: 'pattern-met', pattern: 'gbs-ho-1995' }], words: [] },
      { id: 'motor-neuron', label: 'Disease of the motor neurons suspected', conditions: [], words: ['motor neuron', 'motor neurone', 'amyotrophic'] },
      { id: 'junction', label: 'Disorder of the neuromuscular junction suspected', conditions: [], words: ['myasthen', 'Lambert-Eaton', 'neuromuscular junction'] },
      { id: 'acute-compression', label: 'Acute compression or severed nerve suspected', conditions: [], words: ['severed', 'complete lesion', 'compartment'] },
    ],
  },
})

export interface PromptFinding { id: string, label: string, because: string }

/** Which findings of the list this study or these words call up. A word that is denied ("no sign of …") asks as well: a needless question does no harm. */
export function promptFindings(list: PromptContactList, assessment: Assessment, draft: Pick<ReportDraft, 'impression'>): PromptFinding[] {
  const written = draft.impression.map(line => line.words).join('\n').toLowerCase()
  return list.findings.flatMap(({ id, label, conditions, words }) => {
    const found = allConditions(conditions, assessment)
    const word = words.find(each => written.includes(each.toLowerCase()))
    if (found.met) return [{ id, label, because: found.because }]
    return word ? [{ id, label, because: `the impression says "${word}"` }] : []
  })
}
