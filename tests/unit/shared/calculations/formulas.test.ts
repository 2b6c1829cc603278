import { describe, expect, it } from 'vitest'
import { amplitudeRatio, fallPercent, risePercent } from '#shared/calculations/change-between-sites'
import { combinedSensoryIndex } from '#shared/calculations/combined-sensory-index'
import { absentBecause, notComputable, numberOf, valueOf } from '#shared/calculations/computed-value'
import { conductionVelocity } from '#shared/calculations/conduction-velocity'
import { decrement, keepsFalling } from '#shared/calculations/decrement'
import { chronodispersion, fEstimate, fRatio, fWaveVelocity, peripheralMotorLatency, persistence } from '#shared/calculations/f-wave'
import { expectedHLatency, hmRatio } from '#shared/calculations/h-reflex'
import { increment } from '#shared/calculations/increment'
import { latencyDifference } from '#shared/calculations/latency-difference'
import { abovePercentOf, belowPercentOf, percentOfLimit } from '#shared/calculations/percent-of-limit'
import { residualLatency } from '#shared/calculations/residual-latency'
import { segmentalSensoryVelocity, sensoryVelocity } from '#shared/calculations/sensory-velocity'
import { sideDifference, sideDifferencePercent, sideRatio } from '#shared/calculations/side-difference'
import { splitHandIndex } from '#shared/calculations/split-hand-index'
import { suralRadialRatio } from '#shared/calculations/sural-radial-ratio'
import { correctedLatency, correctedVelocity, exponentiallyCorrectedVelocity } from '#shared/calculations/temperature-correction'
import { terminalLatencyIndex } from '#shared/calculations/terminal-latency-index'
import type { ComputedValue } from '#shared/calculations/types'
import { velocityDrop, velocityDropPercent } from '#shared/calculations/velocity-drop'

const none = absentBecause('no-response')
const technical = absentBecause('technical')
const missing = notComputable('not entered')
const ms = { latencyMs: 0.1, nameOfOther: 'ulnar', nameOfLead: 'median' }

/**
 * A number within 1e-3, the word of an absence, or the reason why there is no number. Add a row to add a case. Each is made
 * inside its test, so that mutation testing sees which test reaches what.
 */
const rows: [name: string, made: () => ComputedValue, expected: number | string][] = [
  ['motor velocity 215 mm in 4.0 ms', () => conductionVelocity({ distanceMm: 215, proximalLatencyMs: 9.2, distalLatencyMs: 5.2 }), 53.75],
  ['motor velocity needs time', () => conductionVelocity({ distanceMm: 215, proximalLatencyMs: 5.2, distalLatencyMs: 5.2 }), 'the proximal latency is not longer than the distal one'],
  ['motor velocity refuses time running back', () => conductionVelocity({ distanceMm: 215, proximalLatencyMs: 5.1, distalLatencyMs: 5.2 }), 'the proximal latency is not longer than the distal one'],
  ['motor velocity needs a way', () => conductionVelocity({ distanceMm: 0, proximalLatencyMs: 9, distalLatencyMs: 5 }), 'the distance is not above 0'],
  ['motor velocity beyond all numbers', () => conductionVelocity({ distanceMm: 1e308, proximalLatencyMs: 1e-300, distalLatencyMs: 0 }), 'the numbers are out of range'],
  ['sensory velocity 140 mm in 3.8 ms', () => sensoryVelocity({ distanceMm: 140, onsetLatencyMs: 3.8 }), 36.842],
  ['sensory velocity needs time', () => sensoryVelocity({ distanceMm: 140, onsetLatencyMs: 0 }), 'the onset latency is not above 0'],
  ['sensory velocity needs a way', () => sensoryVelocity({ distanceMm: -1, onsetLatencyMs: 3 }), 'the distance is not above 0'],
  ['segmental sensory velocity, palm to wrist', () => segmentalSensoryVelocity({ distanceMm: 140, onsetLatencyMs: 3.0 }, { distanceMm: 70, onsetLatencyMs: 1.5 }), 46.667],
  ['velocity drop', () => velocityDrop({ velocityMps: 57.4, distanceMm: 270, timeMs: 4.7 }, { velocityMps: 35.5, distanceMm: 110, timeMs: 3.1 }), 21.9],
  ['velocity drop, per cent', () => velocityDropPercent(60, 48), 20],
  ['velocity drop, per cent of nothing', () => velocityDropPercent(0, 48), 'the velocity of the distal segment is not above 0'],
  ['terminal latency index', () => terminalLatencyIndex({ distalDistanceMm: 70, velocityMps: 55, distalLatencyMs: 3.2 }), 0.398],
  ['terminal latency index of nothing', () => terminalLatencyIndex({ distalDistanceMm: 70, velocityMps: 0, distalLatencyMs: 3.2 }), 'velocity and distal latency must be above 0'],
  ['residual latency', () => residualLatency({ distalLatencyMs: 3.2, distalDistanceMm: 70, velocityMps: 55 }), 1.927],
  ['residual latency at no velocity', () => residualLatency({ distalLatencyMs: 3.2, distalDistanceMm: 70, velocityMps: 0 }), 'the velocity is not above 0'],
  ['persistence 8 of 10', () => persistence({ responses: 8, stimuli: 10 }), 80],
  ['persistence 0 of 10', () => persistence({ responses: 0, stimuli: 10 }), 0],
  ['persistence without stimuli', () => persistence({ responses: 0, stimuli: 0 }), 'no number of stimuli'],
  ['persistence above all', () => persistence({ responses: 11, stimuli: 10 }), 'more responses than stimuli'],
  ['chronodispersion of 16 responses', () => chronodispersion({ minimumMs: 26.1, maximumMs: 29.3, responses: 16 }), 3.2],
  ['chronodispersion of 10 responses', () => chronodispersion({ minimumMs: 26, maximumMs: 28, responses: 10 }), 2],
  ['chronodispersion of 9 responses', () => chronodispersion({ minimumMs: 26, maximumMs: 28, responses: 9 }), 'fewer than 10 responses'],
  ['chronodispersion without a count', () => chronodispersion({ minimumMs: 26, maximumMs: 28, responses: null }), 'number of responses missing'],
  ['chronodispersion back to front', () => chronodispersion({ minimumMs: 28, maximumMs: 26, responses: 12 }), 'the longest latency is shorter than the shortest'],
  ['F-wave velocity', () => fWaveVelocity({ distanceMm: 650, minimumMs: 26, mLatencyMs: 3 }), 59.091],
  ['F-wave velocity, F before M', () => fWaveVelocity({ distanceMm: 650, minimumMs: 4, mLatencyMs: 3 }), 'the F latency is not longer than the M latency'],
  ['F-wave velocity without a way', () => fWaveVelocity({ distanceMm: 0, minimumMs: 26, mLatencyMs: 3 }), 'the distance is not above 0'],
  ['F estimate', () => fEstimate({ distanceMm: 600, velocityMps: 55, distalLatencyMs: 3.2 }), 26.018],
  ['F estimate at no velocity', () => fEstimate({ distanceMm: 600, velocityMps: 0, distalLatencyMs: 3.2 }), 'the velocity is not above 0'],
  ['F estimate without a way', () => fEstimate({ distanceMm: 0, velocityMps: 50, distalLatencyMs: 3.2 }), 'the distance is not above 0'],
  ['F ratio', () => fRatio({ minimumMs: 26, mLatencyMs: 3 }), 3.667],
  ['F ratio without M', () => fRatio({ minimumMs: 26, mLatencyMs: 0 }), 'the M latency is not above 0'],
  ['peripheral motor latency', () => peripheralMotorLatency({ minimumMs: 26, mLatencyMs: 3 }), 14],
  ['expected H latency', () => expectedHLatency({ legLengthMm: 400, ageYears: 50 }), 32.54],
  ['expected H latency without an age', () => expectedHLatency({ legLengthMm: 400, ageYears: null }), 'age missing'],
  ['expected H latency without a leg', () => expectedHLatency({ legLengthMm: 0, ageYears: 50 }), 'the leg length is not above 0'],
  ['H to M', () => hmRatio({ hAmplitudeMv: 3, mAmplitudeMv: 12 }), 0.25],
  ['H to no M', () => hmRatio({ hAmplitudeMv: 3, mAmplitudeMv: 0 }), 'the M amplitude is not above 0'],
  ['amplitude fall', () => fallPercent({ distal: 6.4, proximal: 5.0 }), 21.875],
  ['amplitude rise is a negative fall', () => fallPercent({ distal: 5, proximal: 6 }), -20],
  ['amplitude fall from nothing', () => fallPercent({ distal: 0, proximal: 6 }), 'the distal value is not above 0'],
  ['duration rise', () => risePercent({ distal: 5, proximal: 6.5 }), 30],
  ['duration rise from nothing', () => risePercent({ distal: 0, proximal: 6.5 }), 'the distal value is not above 0'],
  ['amplitude ratio', () => amplitudeRatio({ distal: 6.4, proximal: 5.0 }), 0.781],
  ['amplitude ratio to nothing', () => amplitudeRatio({ distal: 0, proximal: 5.0 }), 'the distal value is not above 0'],
  ['side difference, per cent', () => sideDifferencePercent(0.2, 1.4), 85.714],
  ['side difference, per cent, of nothing', () => sideDifferencePercent(0, 0), 'neither side is above 0'],
  ['side difference has no sign', () => sideDifference(3.9, 5.2), 1.3],
  ['smaller over larger side', () => sideRatio(2, 5), 0.4],
  ['smaller over larger of nothing', () => sideRatio(0, 0), 'neither side is above 0'],
  ['latency difference keeps its sign', () => latencyDifference(valueOf(2.7), valueOf(2.9), ms), -0.2],
  ['absent nerve in question', () => latencyDifference(none, valueOf(2.9), ms), 'no-response'],
  ['nerve in question not recordable', () => latencyDifference(technical, valueOf(2.9), ms), 'median: not recordable'],
  ['absent comparison', () => latencyDifference(valueOf(2.7), none, ms), 'ulnar: no response'],
  ['blank comparison', () => latencyDifference(valueOf(2.7), missing, ms), 'ulnar: not entered'],
  ['combined index', () => combinedSensoryIndex({ palm: valueOf(0.2), ring: valueOf(0.4), thumb: valueOf(0.3) }, 0.1), 0.9],
  ['combined index with a negative part', () => combinedSensoryIndex({ palm: valueOf(-0.1), ring: valueOf(0.1), thumb: valueOf(0.2) }, 0.1), 0.2],
  ['combined index without its thumb', () => combinedSensoryIndex({ palm: valueOf(0.2), ring: none, thumb: missing }, 0.1), 'no ring finger difference, no thumb difference'],
  ['sural to radial', () => suralRadialRatio(valueOf(6), valueOf(20)), 0.3],
  ['sural absent, radial present', () => suralRadialRatio(none, valueOf(20)), 0],
  ['radial absent', () => suralRadialRatio(valueOf(6), none), 'no radial response'],
  ['radial not recordable', () => suralRadialRatio(valueOf(6), technical), 'no radial amplitude'],
  ['sural not recordable is not absent', () => suralRadialRatio(technical, valueOf(20)), 'no sural amplitude'],
  ['decrement to the fourth', () => decrement([8.0, 6.9, 6.4, 6.2, 6.3]), 22.5],
  ['decrement of a short train', () => decrement([8.0, 6.9, 6.4]), 'first or fourth response missing'],
  ['decrement from an absent first', () => decrement(['no-response', 6.9, 6.4, 6.2]), 'first or fourth response missing'],
  ['decrement from nothing', () => decrement([0, 6.9, 6.4, 6.2]), 'the first response is not above 0'],
  ['increment to double', () => increment({ beforeMv: 1, afterMv: 2 }), 100],
  ['increment from nothing', () => increment({ beforeMv: 0, afterMv: 0.4 }), 'the response before is not above 0'],
  ['split hand', () => splitHandIndex({ apb: valueOf(6), fdi: valueOf(9), adm: valueOf(9) }), 6],
  ['split hand, APB absent', () => splitHandIndex({ apb: none, fdi: valueOf(9), adm: valueOf(9) }), 0],
  ['split hand, FDI absent', () => splitHandIndex({ apb: valueOf(6), fdi: none, adm: valueOf(9) }), 0],
  ['split hand, ADM absent: 0.1 mV stands for it', () => splitHandIndex({ apb: valueOf(1), fdi: valueOf(2), adm: none }), 20],
  ['split hand, ADM not recordable', () => splitHandIndex({ apb: valueOf(1), fdi: valueOf(2), adm: technical }), 'no abductor digiti minimi amplitude'],
  ['split hand, ADM of nothing', () => splitHandIndex({ apb: valueOf(1), fdi: valueOf(2), adm: valueOf(0) }), 'the abductor digiti minimi amplitude is not above 0'],
  ['split hand, APB blank', () => splitHandIndex({ apb: missing, fdi: valueOf(2), adm: valueOf(2) }), 'no abductor pollicis brevis amplitude'],
  ['split hand, FDI blank', () => splitHandIndex({ apb: valueOf(1), fdi: missing, adm: valueOf(2) }), 'no first dorsal interosseous amplitude'],
  ['velocity corrected, median motor', () => correctedVelocity({ velocityMps: 44, celsius: 29, nerve: 'median', kind: 'motor' }), 51.5],
  ['velocity corrected, a nerve without its own slope', () => correctedVelocity({ velocityMps: 44, celsius: 29, nerve: 'radial', kind: 'motor' }), 51.5],
  ['velocity corrected, ulnar motor', () => correctedVelocity({ velocityMps: 44, celsius: 29, nerve: 'ulnar', kind: 'motor' }), 54.5],
  ['velocity corrected, exponential', () => exponentiallyCorrectedVelocity({ velocityMps: 44, celsius: 29 }), 54.2547],
  ['latency corrected', () => correctedLatency({ latencyMs: 4.8, celsius: 29 }), 3.8],
  ['latency corrected to nothing', () => correctedLatency({ latencyMs: 0.8, celsius: 29 }), 'the correction is larger than the latency'],
]

describe('formulas', () => {
  it.each(rows)('%s', (_, made, expected) => {
    const out = made()
    if (typeof expected === 'number') {
      expect(out.kind).toBe('value')
      expect(out.kind === 'value' && out.value).toBeCloseTo(expected, 3)
    }
    else {
      expect(out.kind === 'absent' ? out.absence : out.kind === 'not-computable' ? out.because : out.value).toBe(expected)
    }
  })

  it('residual latency = latency x (1 - terminal latency index)', () => {
    const input = { distalDistanceMm: 70, velocityMps: 55, distalLatencyMs: 3.2 }
    const [residual, index] = [residualLatency(input), terminalLatencyIndex(input)]
    expect(residual.kind === 'value' && index.kind === 'value' && residual.value - 3.2 * (1 - index.value)).toBeCloseTo(0, 12)
  })
})

it('the expected H latency takes the length from knee crease to ankle: 36 cm at 40 years give its own mean of 29.8 ms (both from memory), a whole leg would not', () => {
  const expected = (legLengthMm: number) => numberOf(expectedHLatency({ legLengthMm, ageYears: 40 }))
  expect(expected(360)).toBeCloseTo(29.7, 1)
  expect(expected(850)).toBeGreaterThan(45)
})

describe('a train that keeps falling', () => {
  it.each<[string, (number | 'technical')[], boolean]>([
    ['levels off', [8.0, 6.9, 6.4, 6.2, 6.3, 6.3], false],
    ['falls to the end', [8.0, 7.7, 7.4, 7.1, 6.8, 6.5, 6.2], true],
    ['is too short to say', [8.0, 7.7, 7.4, 7.1, 6.8], false],
    ['has a response missing', [8.0, 7.7, 'technical', 7.1, 6.8, 6.5], false],
  ])('%s', (_, train, expected) => expect(keepsFalling(train)).toBe(expected))
})

describe('per cent of a limit', () => {
  it('is not cut as on a printed card', () => expect(percentOfLimit(36.5, 41)).toBeCloseTo(89.024, 3))
  it('has none where the limit is 0', () => expect(percentOfLimit(36.5, 0)).toBeNull())
  it.each([
    ['5.62 is not above 125 % of 4.5', () => abovePercentOf(5.62, 4.5, 125), false],
    ['5.63 is above 125 % of 4.5', () => abovePercentOf(5.63, 4.5, 125), true],
    ['5.4 is at 150 % of 3.6', () => abovePercentOf(5.4, 3.6, 150, true), true],
    ['5.4 is not above 150 % of 3.6', () => abovePercentOf(5.4, 3.6, 150), false],
    ['44 is below 90 % of 50', () => belowPercentOf(44, 50, 90), true],
    ['45 is not below 90 % of 50', () => belowPercentOf(45, 50, 90), false],
    ['35 is at 70 % of 50', () => belowPercentOf(35, 50, 70, true), true],
    ['35.1 is not at 70 % of 50', () => belowPercentOf(35.1, 50, 70, true), false],
  ])('%s', (_, made, expected) => expect(made()).toBe(expected))
})
