import * as z from 'zod'
import { policyKind } from './kind'

const least = (limb: string) => z.number(`Enter the lowest temperature of the ${limb}, in °C.`).min(20, 'Enter 20 °C or more.').max(37, 'Enter at most 37 °C.')

/** From which skin temperature on a limb is not cold. */
export const temperatureSchema = z.object({
  handMinimumC: least('hand'),
  footMinimumC: least('foot'),
  /** Show values corrected for temperature beside the measured ones; they never judge. */
  correctionShown: z.boolean(),
})
export type TemperaturePolicy = z.infer<typeof temperatureSchema>

/**
 * 32 °C hand and 30 °C foot: sources differ (a guideline of the United Kingdom above 30 °C at the hand, read; 32 to 33 °C,
 * read; 33 and 30 °C in a neuropathy guideline, from memory).
 */
export const temperature = policyKind({
  label: 'Temperature',
  about: 'From which skin temperature on a limb counts as warm, and whether corrected values are shown.',
  scope: 'site',
  schema: temperatureSchema,
  initial: { handMinimumC: 32, footMinimumC: 30, correctionShown: false },
})
