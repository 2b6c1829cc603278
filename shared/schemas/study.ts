import * as z from 'zod'
import { quantities, type QuantityId } from '../catalogue/quantities'
import { idSchema, isoDateSchema, isoDateTimeSchema, limitSexes, referralSides, sideSchema } from './common'

/**
 * What was recorded, as typed. This file is the input of `assessStudy`, the body of the autosave routes
 * and the format of `npm run evaluate`. Nothing computed stands here.
 */
export const STUDY_FORMAT = 'orthodrome-study/1'

/**
 * Four ways of not having a number; none of them is 0 or blank.
 * no-response: stimulated supramaximally, nothing recorded. technical: not recordable for technical reasons.
 * not-done: planned and left out. stopped: at the patient's wish.
 */
export const absences = ['no-response', 'technical', 'not-done', 'stopped'] as const
export type Absence = (typeof absences)[number]
export const absenceLabels: Record<Absence, string> = {
  'no-response': 'no response',
  'technical': 'technical',
  'not-done': 'not done',
  'stopped': 'stopped',
}

/** One typed cell: a finite number in the quantity's unit, or one of the absences. A blank cell is left out. */
export const entrySchema = z.union([z.number().finite(), z.enum(absences)])
export type Entry = z.infer<typeof entrySchema>

const quantityIds = Object.keys(quantities) as [QuantityId, ...QuantityId[]]

export const runRowSchema = z.object({
  id: idSchema,
  /** A stimulation site id of the technique. */
  site: idSchema,
  values: z.partialRecord(z.enum(quantityIds), entrySchema).default({}),
  /** F-wave or train: the single responses, in the unit of the series (ms or mV). */
  series: z.array(entrySchema).max(200).optional(),
  /** Needle examination and other ordinal scales. */
  ordinals: z.record(idSchema, z.string().max(200)).optional(),
})
export type RunRow = z.infer<typeof runRowSchema>

export const qualityReasons = ['artefact', 'oedema', 'callus', 'cannot relax', 'pain limit reached', 'obesity', 'amputated digit', 'scar', 'electrode position altered', 'distance hard to measure', 'cold despite warming', 'tremor', 'sedation'] as const

export const runSchema = z.object({
  id: idSchema,
  /** Technique id of the catalogue. */
  technique: idSchema,
  side: sideSchema,
  /** Distal to proximal. */
  rows: z.array(runRowSchema).max(40),
  direction: z.enum(['antidromic', 'orthodromic']).optional(),
  amplitudeDefinition: z.enum(['onset-to-peak', 'peak-to-peak', 'baseline-to-peak']).optional(),
  /** Needed before any rule on the duration of the distal motor response. */
  lowFrequencyFilterHz: z.number().positive().optional(),
  elbowFlexionDegrees: z.number().min(0).max(150).optional(),
  /** Segments under 80 mm are declared, never assumed. */
  shortSegments: z.boolean().optional(),
  /** The temperature reading this run was recorded at; without it, the latest of that limb and side. */
  temperatureId: idSchema.optional(),
  /** The cold run that this one repeats warm. */
  repeats: idSchema.optional(),
  /** Reader's choice to interpret a cold run that could not be repeated, with the reason that is printed. */
  interpretColdBecause: z.string().max(500).optional(),
  quality: z.object({
    grade: z.enum(['good', 'acceptable', 'poor']),
    reasons: z.array(z.enum(qualityReasons)).default([]),
    note: z.string().max(500).default(''),
  }).optional(),
  /** A planned run that was left out says why. */
  notDoneBecause: z.string().max(500).optional(),
  recordedAt: isoDateTimeSchema.optional(),
})
export type Run = z.infer<typeof runSchema>

export const temperatureSchema = z.object({
  id: idSchema,
  segment: z.enum(['hand', 'foot']),
  side: sideSchema,
  celsius: z.number().min(15).max(42),
  at: isoDateTimeSchema.optional(),
  method: z.string().max(100).optional(),
  warmed: z.boolean().default(false),
})
export type LimbTemperature = z.infer<typeof temperatureSchema>

/** What one cell holds, whatever its kind: an entry, a step of a scale, a series. */
export const cellContentSchema = z.union([entrySchema, z.string().max(200), z.array(entrySchema).max(200)])

/**
 * A question of the program that the technologist answered with a reason and kept. `key` is `Remark.key`.
 * The answer is bound to what it answered: the words of the question and the cells (`rowId/field`) it rested on. When one
 * of them changes the question is open again. An answer without them is bound to its key alone.
 */
export const keptCheckSchema = z.object({
  key: z.string().max(200), reason: z.string().min(1).max(500),
  sentence: z.string().max(2000).optional(),
  cells: z.record(z.string().max(140), cellContentSchema).optional(),
})
export type KeptCheck = z.infer<typeof keptCheckSchema>

export const studySchema = z.object({
  format: z.literal(STUDY_FORMAT).default(STUDY_FORMAT),
  id: idSchema,
  /** The day of the study at the site: age is reckoned on it, not on today. */
  studyDate: isoDateSchema,
  patient: z.object({
    birthDate: isoDateSchema,
    sexForLimits: z.enum(limitSexes).nullable(),
  }),
  heightCm: z.number().min(30).max(250).nullable().default(null),
  weightKg: z.number().min(1).max(400).nullable().default(null),
  referralSide: z.enum(referralSides).nullable().default(null),
  temperatures: z.array(temperatureSchema).max(60).default([]),
  runs: z.array(runSchema).max(200).default([]),
  keptChecks: z.array(keptCheckSchema).max(400).default([]),
  /** Visits after the first: a temperature serves only the runs of its own visit. */
  visits: z.array(z.object({ startedAt: isoDateTimeSchema })).max(20).optional(),
}).superRefine((study, context) => {
  const seen = new Set<string>()
  for (const [index, run] of study.runs.entries()) {
    if (seen.has(run.id)) context.addIssue({ code: 'custom', path: ['runs', index, 'id'], message: `Run id ${run.id} occurs twice.` })
    seen.add(run.id)
  }
})
export type Study = z.infer<typeof studySchema>
