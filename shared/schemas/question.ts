import * as z from 'zod'
import { idSchema, sideSchema, type Side } from './common'

/** open → answered, or taken back by the bench; never open again: one asks anew. */
export const questionStates = ['open', 'answered', 'withdrawn'] as const
export type QuestionState = (typeof questionStates)[number]

/** Minutes after which a question that nobody answered becomes a task of the readers (common practice, no source). */
export const OVERDUE_MINUTES = 10

export const askSchema = z.object({ runId: idSchema.nullable().default(null), question: z.string().trim().min(3, 'Write the question.').max(500, 'Write the question in at most 500 characters.') })

/** Words, a run to add, or both. */
export const answerSchema = z.object({
  answer: z.string().trim().max(1000, 'Write the answer in at most 1000 characters.').default(''),
  addRun: z.object({ technique: idSchema, side: sideSchema }).nullable().default(null),
}).refine(({ answer, addRun }) => answer.length > 0 || addRun !== null, { path: ['answer'], message: 'Write the answer, or choose a run to add.' })

/** One question as bench and reader see it. */
export interface QuestionView {
  id: string
  studyId: string
  studyNumber: string
  siteId: string
  siteName: string
  runId: string | null
  /** The run's technique and side now; null when the question is about the whole study or the run was taken away. */
  run: { technique: string, side: Side } | null
  question: string
  askedBy: string
  askedAt: string
  state: QuestionState
  seenBy: string | null
  seenAt: string | null
  answer: string
  addedRunId: string | null
  addedRun: { technique: string, side: Side } | null
  closedBy: string | null
  closedAt: string | null
}
