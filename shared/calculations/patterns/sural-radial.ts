import type { Side } from '../../schemas/common'
import { againstBar } from './criteria'
import { comparisonReading, missing, type Facts, type Reading, type RunFacts } from './facts'
import { criterion, notAssessable, passes, plainNumber, printBeside, type CriterionText, type Finding } from './finding'
import type { Assessed, PatternSet } from './pattern-set'

/** Lower limits by age in completed years, from each age on: Mansukhani 2020 (values read; decades between 30 and 70 derived). */
const byAge: readonly { fromYears: number, limit: number }[] = [
  { fromYears: 18, limit: 0.30 }, { fromYears: 31, limit: 0.23 }, { fromYears: 41, limit: 0.20 },
  { fromYears: 51, limit: 0.17 }, { fromYears: 61, limit: 0.17 }, { fromYears: 71, limit: 0.08 },
]

const texts = {
  screening: { id: 'below-0-40', text: 'Sural to superficial radial amplitude below 0.40', basis: 'read' },
  strict: { id: 'below-0-21', text: 'Beside: below 0.21, a cut-off for a normal sural response (sensitivity 52 %, specificity 84 %; Eur J Neurol 2009, doi:10.1111/j.1468-1331.2009.02651.x)', basis: 'read' },
  age: { id: 'below-age', text: 'Beside: below the lower limit for the age (Mansukhani et al. 2020, doi:10.4103/aian.AIAN_321_20; whether the ratio depends on age is disputed)', basis: 'derived' },
} as const satisfies Record<string, CriterionText>

/** A screening ratio of axonal polyneuropathy, one per side; both recorded antidromically and measured the same way. */
export const suralRadial: PatternSet = {
  id: 'sural-radial-1997', version: 1, title: 'Sural to radial amplitude ratio', basis: 'read', scope: 'side',
  source: 'Rutkove SB et al., Muscle Nerve 1997;20:1236-1241, doi:10.1002/(sici)1097-4598(199710)20:10<1236::aid-mus5>3.0.co;2-d (abstract read)',
  criteria: Object.values(texts),
  assess: assessRatio,
}

function assessRatio(facts: Facts, side: Side): Assessed | null {
  const [sural, radial] = [facts.run('sural', side), facts.run('radial-sensory-snuffbox', side)]
  if (!sural || !radial) return null
  const reading = ratioReading(facts, side, sural, radial)
  const screening = againstBar(reading, { op: 'below', value: 0.4 })
  const criteria = [
    criterion(texts.screening, withPlaces(reading, screening, 0.4)),
    criterion(texts.strict, withPlaces(reading, againstBar(reading, { op: 'below', value: 0.21 }), 0.21)),
    criterion(texts.age, ageFinding(facts, reading)),
  ]
  return { outcome: { met: screening.result, label: labelOf(reading, screening) }, criteria, runIds: [sural.id, radial.id] }
}

function ratioReading(facts: Facts, side: Side, sural: RunFacts, radial: RunFacts): Reading {
  const way = ({ recorded, technique }: RunFacts) => recorded?.amplitudeDefinition ?? technique.amplitudeDefinition
  const direction = ({ recorded, technique }: RunFacts) => recorded?.direction ?? technique.direction
  if (way(sural) !== way(radial)) return missing('the amplitudes are measured in two ways')
  if ([sural, radial].some(run => direction(run) !== 'antidromic')) return missing('not both recorded antidromically')
  return comparisonReading(facts, 'sural-radial', side, 'suralRadialRatio')
}

/** Two decimals, as the ratio is printed. */
const withPlaces = (reading: Reading, finding: Finding, bar: number): Finding =>
  reading.state === 'number' ? { ...finding, numbers: printBeside(reading.value, 2, { op: 'below', value: bar }) } : finding

function ageFinding(facts: Facts, reading: Reading): Finding {
  const { ageYears } = facts.input.person
  if (ageYears === null) return notAssessable('age not known')
  const band = byAge.findLast(({ fromYears }) => ageYears >= fromYears)
  if (!band) return notAssessable('no limit under 18 years')
  if (reading.state !== 'number') return notAssessable(reading.because)
  const bar = { op: 'below', value: band.limit } as const
  return { result: passes(reading.value, bar) ? 'met' : 'not-met', numbers: `${printBeside(reading.value, 2, bar)}, limit ${plainNumber(band.limit)} from ${band.fromYears} years` }
}

function labelOf(reading: Reading, { result }: Finding): string {
  if (result === 'not-assessable') return `not assessable: ${reading.because}`
  const text = printBeside(reading.value, 2, { op: 'below', value: 0.4 })
  return result === 'met' ? `ratio ${text}, below 0.40` : `ratio ${text}`
}
