import * as z from 'zod'
import { otherLanguages } from '../report/languages'
import { policyKind } from './kind'

const caution = z.string().trim().min(60, 'Enter at least 60 characters: that the results support and do not replace clinical judgement, that limits depend on technique, temperature and population, and which rules hold.').max(1200, 'Enter at most 1200 characters.')

/** How reports are printed, and the words that stand under every one of them. */
export const reportFormSchema = z.object({
  paperSize: z.enum(['A4', 'LETTER'], 'Choose the paper.'),
  /** Configurable, never empty: it says that the results support and do not replace clinical judgement. */
  disclaimer: caution,
  /** The same in the other languages of reports. Where one is left empty, the program's own words in that language stand before the English ones. */
  disclaimerIn: z.partialRecord(z.enum(otherLanguages), caution.or(z.literal(''))).default({}),
})
export type ReportFormPolicy = z.infer<typeof reportFormSchema>

export const reportForm = policyKind({
  label: 'Report form',
  about: 'Paper, and the caution that stands under every report.',
  scope: 'organisation',
  schema: reportFormSchema,
  initial: { paperSize: 'A4', disclaimer: 'The results in this report support and do not replace clinical judgement. Limits depend on technique, temperature and population. Follow local regulations and licensed practice.', disclaimerIn: {} },
})
