import type { Side } from '../../schemas/common'
import { againstBar } from './criteria'
import { comparisonReading, missing, usualSite, type Facts, type Reading } from './facts'
import { anyOf, criterion, notAssessable, passes, plainNumber, type Bar, type CriterionText, type Finding } from './finding'
import { eachOnce, type Assessed, type PatternSet } from './pattern-set'

const above = (value: number): Bar => ({ op: 'above', value })

/** Each part with the way it is to be recorded, its limit, and the grey zone in which further tests are needed; ms and mm. */
const parts = [
  { id: 'palm', comparison: 'median-ulnar-palm', techniques: ['median-mixed-palm', 'ulnar-mixed-palm'], distanceMm: 80, direction: 'orthodromic', limit: above(0.3), grey: [0, 0.3] },
  { id: 'ring', comparison: 'median-ulnar-ring', techniques: ['median-sensory-d4', 'ulnar-sensory-d4'], distanceMm: 140, direction: 'antidromic', limit: above(0.4), grey: [0.1, 0.4] },
  { id: 'thumb', comparison: 'median-radial-thumb', techniques: ['median-sensory-d1', 'radial-sensory-d1'], distanceMm: 100, direction: 'antidromic', limit: above(0.5), grey: [0.2, 0.7] },
] as const
type Part = (typeof parts)[number]
const indexLimit = above(0.9)

const texts = {
  palm: { id: 'palm', text: 'Palm, 80 mm, median minus ulnar peak: above 0.3 ms', basis: 'memory' },
  ring: { id: 'ring', text: 'Ring finger, 140 mm, median minus ulnar peak: above 0.4 ms', basis: 'memory' },
  thumb: { id: 'thumb', text: 'Thumb, 100 mm, median minus radial peak: above 0.5 ms', basis: 'memory' },
  index: { id: 'index', text: 'Combined sensory index (palm + ring finger + thumb): above 0.9 ms', basis: 'memory' },
  grey: { id: 'grey-zone', text: 'A single test inside its grey zone (palm 0 to 0.3, ring finger 0.1 to 0.4, thumb 0.2 to 0.7 ms): further tests needed', basis: 'read' },
} as const satisfies Record<string, CriterionText>

/** Combined sensory index of carpal tunnel syndrome, one per hand. Its four limits rest on memory. */
export const combinedIndex: PatternSet = {
  id: 'combined-sensory-index', version: 1, title: 'Carpal tunnel syndrome, combined sensory index', basis: 'memory', scope: 'side',
  source: 'Robinson LR et al., Muscle Nerve 1998;21:1166-1171, doi:10.1002/(sici)1097-4598(199809)21:9<1166::aid-mus7>3.0.co;2-5 (limits recalled); technique read in Lew HL et al., Muscle Nerve 2000;23:1261-1264; grey zones read in an abstract of Robinson et al. 2000',
  criteria: Object.values(texts),
  assess: assessIndex,
}

function assessIndex(facts: Facts, side: Side): Assessed | null {
  const readings = parts.map(part => ({ part, reading: partReading(facts, part, side) }))
  const studied = readings.filter(({ part }) => facts.run(part.techniques[0], side))
  if (studied.length === 0) return null
  const index = indexFinding(facts, side, readings.map(one => one.reading))
  const single = studied.map(({ part, reading }) => ({ part, finding: againstBar(reading, part.limit) }))
  const criteria = [
    ...single.map(({ part, finding }) => criterion(texts[part.id], finding)),
    criterion(texts.index, index), criterion(texts.grey, greyZone(studied)),
  ]
  return { outcome: outcomeOf(index, studied), criteria, runIds: eachOnce(parts.flatMap(part => part.techniques.map(technique => facts.run(technique, side)?.id))) }
}

/** The difference, where both nerves were recorded as the index asks. */
function partReading(facts: Facts, part: Part, side: Side): Reading {
  for (const technique of part.techniques) {
    const run = facts.run(technique, side)
    if (!run) return missing(`no ${technique.split('-')[0]} study`)
    const distance = facts.input.resultOf(run.assessment, 'distanceMm', usualSite(run.technique))?.value
    if (distance?.kind !== 'value') return missing('distance missing')
    if (distance.value !== part.distanceMm) return missing(`recorded over ${plainNumber(distance.value)} mm, not ${part.distanceMm} mm`)
    if ((run.recorded?.direction ?? run.technique.direction) !== part.direction) return missing(`not recorded ${part.direction}`)
  }
  return comparisonReading(facts, part.comparison, side, 'peakDifferenceMs')
}

/** Only with all three parts; a lost median response is said, not counted. */
function indexFinding(facts: Facts, side: Side, readings: readonly Reading[]): Finding {
  const gaps = parts.map((part, place) => readings[place]?.state === 'number' ? '' : `${part.id}: ${readings[place]?.because ?? 'not recorded'}`).filter(gap => gap)
  if (gaps.length > 0) return notAssessable(gaps.join('; '))
  return againstBar(comparisonReading(facts, 'combined-sensory-index', side, 'combinedIndexMs'), indexLimit)
}

const inGrey = ({ part, reading }: { part: Part, reading: Reading }) =>
  passes(reading.value, { op: 'at-least', value: part.grey[0] }) && passes(reading.value, { op: 'at-most', value: part.grey[1] })

function greyZone(studied: readonly { part: Part, reading: Reading }[]): Finding {
  const known = studied.filter(({ reading }) => reading.state === 'number')
  if (known.length === 0) return notAssessable('no difference could be computed')
  const grey = known.filter(inGrey).map(({ part }) => part.id)
  return { result: anyOf(known.map(one => inGrey(one) ? 'met' : 'not-met')), numbers: grey.length > 0 ? grey.join(', ') : 'none' }
}

/** Without the index, a single test outside its grey zone points the way but decides nothing. */
function outcomeOf(index: Finding, studied: readonly { part: Part, reading: Reading }[]): Assessed['outcome'] {
  if (index.result !== 'not-assessable') return { met: index.result, label: `index ${index.numbers}` }
  const clear = studied.filter(one => one.reading.state === 'number' && !inGrey(one))
  return { met: 'not-assessable', label: clear.length > 0 ? `index not computable; ${clear.map(({ part }) => part.id).join(', ')} outside the grey zone` : 'index not computable' }
}
