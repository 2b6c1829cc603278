import * as z from 'zod'
import { idSchema, isoDateSchema } from './common'

/** From the first to the last day, both included, by the organisation's calendar. */
export const absenceSchema = z.object({
  fromDay: isoDateSchema,
  toDay: isoDateSchema,
  coveredBy: idSchema.or(z.literal('')).refine(id => id !== '', 'Choose who covers.'),
}).refine(({ fromDay, toDay }) => toDay >= fromDay, { path: ['toDay'], message: 'The last day must not lie before the first.' })
export type AbsenceInput = z.output<typeof absenceSchema>

export interface AbsenceRow { id: string, userId: string, fromDay: string, toDay: string, coveredBy: string, coveredByName: string }
export interface AbsencesView { rows: AbsenceRow[], /** who holds the same role at one of the same sites */ covers: { id: string, name: string }[] }
