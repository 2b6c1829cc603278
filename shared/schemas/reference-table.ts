import * as z from 'zod'
import { idSchema, limitSexes } from './common'

/**
 * One set of limits as the project ships it (reference-tables/<id>.json) and as a laboratory imports its own.
 * A corrected set is a new version with a `changes` line; signed reports keep their own copy of the rows they used.
 */
export const limitRowSchema = z.object({
  id: idSchema,
  /** Technique id of the catalogue; null when the catalogue has no technique for it (kept as context). */
  technique: idSchema.nullable(),
  /** As the source names it, for people. */
  source: z.object({ nerve: z.string(), studyType: z.string(), site: z.string().nullable(), recordingSite: z.string().nullable(), quantity: z.string(), locator: z.string() }),
  /** A quantity id of the catalogue or of the calculations (velocityMps, onsetDifferenceMs, …); null when there is none. */
  quantity: z.string().nullable(),
  /** The stimulation site id (for a site's own quantity) or the segment id (velocity, fall) that it judges; null for any. */
  at: z.string().nullable().default(null),
  direction: z.enum(['antidromic', 'orthodromic']).nullable().default(null),
  amplitudeDefinition: z.enum(['onset-to-peak', 'peak-to-peak', 'baseline-to-peak']).nullable().default(null),
  /** The source's fixed distance: the run has to have exactly this one. Motor amplitudes, velocities and falls carry none. */
  distanceMm: z.number().positive().nullable().default(null),
  /** Or a range of distances, both ends inclusive. */
  distanceMinMm: z.number().positive().nullable().default(null),
  distanceMaxMm: z.number().positive().nullable().default(null),
  unit: z.string(),
  bound: z.enum(['upper', 'lower']).nullable(),
  /** limit: judged by. context: shown to people, never judged by. */
  use: z.enum(['limit', 'context']),
  contextBecause: z.string().optional(),
  kind: z.enum(['percentile', 'mean-sd', 'transformed-mean-sd', 'regression', 'cut-off', 'range', 'mean']),
  value: z.number().nullable(),
  mean: z.number().optional(),
  sd: z.number().optional(),
  sdMultiple: z.number().optional(),
  scale: z.enum(['raw', 'log', 'sqrt']).default('raw'),
  /** value = intercept + sum(coefficient × item); items: ageYears, heightCm, … */
  regression: z.object({ intercept: z.number(), coefficients: z.record(z.string(), z.number()), residualSd: z.number().optional() }).optional(),
  percentile: z.number().nullable().default(null),
  definition: z.string(),
  n: z.number().int().nullable().default(null),
  ageMinYears: z.number().nullable().default(null),
  /** Inclusive, in completed years. Months and days are fractions of a year, see README. */
  ageMaxYears: z.number().nullable().default(null),
  /** Bands in months or days end before their maximum. */
  ageMaxExclusive: z.boolean().default(false),
  sex: z.enum(limitSexes).nullable().default(null),
  heightMinCm: z.number().nullable().default(null),
  /** Exclusive. */
  heightMaxCm: z.number().nullable().default(null),
  bmiMin: z.number().nullable().default(null),
  /** Exclusive. */
  bmiMax: z.number().nullable().default(null),
  subgroup: z.string().default(''),
  basis: z.enum(['read', 'from memory', 'derived']),
  confidence: z.enum(['high', 'medium', 'low']).optional(),
  remark: z.string().optional(),
})
export type LimitRow = z.infer<typeof limitRowSchema>

export const referenceTableSchema = z.object({
  id: idSchema,
  version: z.number().int().min(1),
  title: z.string(),
  citation: z.string().min(10),
  doi: z.string().nullable(),
  population: z.string(),
  technique: z.string(),
  warning: z.string().optional(),
  /** The percentiles that judge; rows of others are context. */
  declared: z.object({ lowerPercentile: z.number().nullable(), upperPercentile: z.number().nullable(), words: z.string() }),
  minimumTemperatureC: z.object({ hand: z.number().nullable(), foot: z.number().nullable() }),
  changes: z.array(z.object({ version: z.number().int(), date: z.string(), what: z.string() })).min(1),
  rows: z.array(limitRowSchema),
})
export type ReferenceTable = z.infer<typeof referenceTableSchema>
