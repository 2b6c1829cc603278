import * as z from 'zod'
import { techniqueOf } from '../catalogue/nerves'

/** The head of the file of a laboratory's own limits, in the order of the template. */
export const ownSetColumns = ['technique', 'quantity', 'at', 'direction', 'amplitude_definition', 'distance_mm', 'unit', 'bound', 'value', 'age_min', 'age_max', 'sex', 'height_min_cm', 'height_max_cm', 'bmi_min', 'bmi_max', 'n', 'definition', 'locator', 'remark'] as const
export type OwnSetColumn = (typeof ownSetColumns)[number]

/** What stands in each column, for the page and the template's second line. */
export const ownSetColumnWords: Record<OwnSetColumn, string> = {
  technique: 'technique of the catalogue', quantity: 'quantity of the catalogue', at: 'stimulation site or segment; blank for any', direction: 'antidromic or orthodromic; blank for either',
  amplitude_definition: 'onset-to-peak, peak-to-peak or baseline-to-peak; blank for any', distance_mm: 'fixed distance in mm', unit: 'ms, m/s, mV, µV or %', bound: 'upper or lower', value: 'the limit',
  age_min: 'years, inclusive', age_max: 'years, inclusive', sex: 'female or male; blank for both', height_min_cm: 'cm, inclusive', height_max_cm: 'cm, exclusive', bmi_min: 'inclusive', bmi_max: 'exclusive',
  n: 'people measured', definition: 'what the limit is, in words', locator: 'where it is printed or kept', remark: '',
}

/** Two invented lines that show the form. */
export const ownSetExample: Partial<Record<OwnSetColumn, string>>[] = [
  { technique: 'median-motor-apb', quantity: 'latencyMs', at: 'wrist', distance_mm: '80', unit: 'ms', bound: 'upper', value: '4.4', age_min: '18', age_max: '79', n: '120', definition: '97th percentile', locator: 'own data, invented example' },
  { technique: 'sural', quantity: 'amplitudeUv', at: '', direction: 'antidromic', amplitude_definition: 'onset-to-peak', unit: 'µV', bound: 'lower', value: '6', age_min: '18', age_max: '59', n: '120', definition: '3rd percentile', locator: 'own data, invented example' },
]

const percentile = z.number('Enter a number.').gt(0, 'A percentile lies between 0 and 100.').lt(100, 'A percentile lies between 0 and 100.').nullable()
const celsius = z.number('Enter a number.').min(20, 'Enter 20 to 36 °C.').max(36, 'Enter 20 to 36 °C.').nullable()

export const ownSetHeadSchema = z.object({
  id: z.string().trim().regex(/^[a-z0-9]+(-[a-z0-9]+)*$/, 'Use small letters, digits and dashes, for example own-2026.').max(40, 'Use 40 letters at most.'),
  title: z.string().trim().min(6, 'Give the set a title of 6 letters or more.').max(120),
  citation: z.string().trim().min(10, 'Say where the limits come from: publication, or who measured whom and when.').max(600),
  population: z.string().trim().min(6, 'Say who was measured.').max(400),
  technique: z.string().trim().min(6, 'Say how it was recorded.').max(600),
  lowerPercentile: percentile, upperPercentile: percentile, handMinimumC: celsius, footMinimumC: celsius,
  changeNote: z.string().trim().min(3, 'Say what is new in this version.').max(400),
})
export type OwnSetHead = z.infer<typeof ownSetHeadSchema>

/** POST /api/shelf/own-sets: a CSV with a head, or the JSON of a whole set. `store` false only checks. */
export const ownSetImportSchema = z.discriminatedUnion('format', [
  z.object({ format: z.literal('csv'), head: ownSetHeadSchema, text: z.string().min(1, 'Choose a file.').max(1_000_000, 'The file is larger than 1 MB.'), store: z.boolean(), checksAccepted: z.boolean().default(false) }),
  z.object({ format: z.literal('json'), text: z.string().min(1, 'Choose a file.').max(2_000_000, 'The file is larger than 2 MB.'), store: z.boolean(), checksAccepted: z.boolean().default(false) }),
])
export interface OwnSetRemark { strength: 'stop' | 'check', row: number | null, column: string, message: string }
export interface OwnSetAnswer { stored: boolean, id: string, version: number, rows: number, remarks: OwnSetRemark[] }

export function nerveLabelOf(technique: string): string {
  return techniqueOf(technique.replace(/^side-difference\//, ''))?.nerve ?? technique
}
