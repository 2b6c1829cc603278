import { describe, expect, it } from 'vitest'
import { conductionVelocity } from '#shared/calculations/conduction-velocity'
import { residualLatency, residualLatencyUncertainty } from '#shared/calculations/residual-latency'
import { segmentalSensoryVelocity, sensoryVelocity } from '#shared/calculations/sensory-velocity'
import { latencySumUncertainty, propagate, velocityDropUncertainty, velocityUncertainty } from '#shared/calculations/uncertainty'
import { fWaveVelocity } from '#shared/calculations/f-wave'

const stated = { distanceMm: 5, latencyMs: 0.1 }

it('the end gauge of the Guide (JCGM 100, example H.1): 25, 9.7, 2.9 and 16.6 nm make 32 nm; numbers from memory', () => {
  const combined = propagate([25, 9.7, 2.9, 16.6].map(expanded => ({ sensitivity: 1, expanded })))
  expect(combined).toBeCloseTo(31.65, 1)
  expect(Math.round(combined)).toBe(32)
})

it('215 mm in 4.0 ms by hand', () => {
  // dv/dd = 1/4.0 = 0.25 per ms; dv/dL = 215/4.0^2 = 13.4375 m/s per ms, once for each cursor
  const byHand = Math.sqrt((0.25 * 5) ** 2 + (13.4375 * 0.1) ** 2 + (13.4375 * 0.1) ** 2)
  expect(byHand).toBeCloseTo(2.2746, 4)
  const velocity = conductionVelocity({ distanceMm: 215, proximalLatencyMs: 9.2, distalLatencyMs: 5.2 }, stated)
  expect(velocity.kind === 'value' && velocity.uncertainty).toBeCloseTo(byHand, 10)
})

describe('50 m/s over ever shorter ways (formula collection F1.5, derived)', () => {
  it.each([[250, 5.0, 1.7], [100, 2.0, 4.3], [60, 1.2, 7.2]])('%i mm in %f ms: %f m/s', (distanceMm, timeMs, expected) => {
    expect(velocityUncertainty({ velocityMps: 50, distanceMm, timeMs, cursors: 2 }, stated)).toBeCloseTo(expected, 1)
  })
})

it('one cursor at a sensory response, the stimulus being the zero', () => {
  const velocity = sensoryVelocity({ distanceMm: 140, onsetLatencyMs: 3.8 }, stated)
  expect(velocity.kind === 'value' && velocity.uncertainty).toBeCloseTo(36.842 * Math.hypot(5 / 140, 0.1 / 3.8), 3)
})

it('two distances in a sensory segment', () => {
  const velocity = segmentalSensoryVelocity({ distanceMm: 140, onsetLatencyMs: 3 }, { distanceMm: 70, onsetLatencyMs: 1.5 }, stated)
  expect(velocity.kind === 'value' && velocity.uncertainty).toBeCloseTo(46.667 * Math.sqrt((Math.SQRT2 * 5 / 70) ** 2 + 2 * (0.1 / 1.5) ** 2), 3)
})

/** Central differences, step 1e-5: what first-order propagation says, without its algebra. */
function numerically(rule: (inputs: number[]) => number, inputs: number[], expanded: number[]): number {
  const step = 1e-5
  return Math.sqrt(inputs.reduce((sum, input, index) => {
    const moved = (by: number) => rule(inputs.map((one, other) => other === index ? input + by : one))
    return sum + ((moved(step) - moved(-step)) / (2 * step) * (expanded[index] as number)) ** 2
  }, 0))
}

it('a drop shares the latency between its segments', () => {
  const rule = ([d1, d2, l1, l2, l3]: number[]) => (d1 as number) / ((l2 as number) - (l1 as number)) - (d2 as number) / ((l3 as number) - (l2 as number))
  const expected = numerically(rule, [270, 110, 3.6, 8.3, 11.4], [5, 5, 0.1, 0.1, 0.1])
  const distal = { velocityMps: 270 / 4.7, distanceMm: 270, timeMs: 8.3 - 3.6 }
  const proximal = { velocityMps: 110 / 3.1, distanceMm: 110, timeMs: 11.4 - 8.3 }
  expect(velocityDropUncertainty(distal, proximal, stated)).toBeCloseTo(expected, 4)
  // Taken as independent it would come out smaller.
  expect(expected).toBeGreaterThan(Math.hypot(velocityUncertainty({ ...distal, cursors: 2 }, stated), velocityUncertainty({ ...proximal, cursors: 2 }, stated)))
})

it('a residual latency has its distal latency in it twice', () => {
  const rule = ([l1, l2, near, along]: number[]) => {
    const value = residualLatency({ distalLatencyMs: l1 as number, distalDistanceMm: near as number, velocityMps: (along as number) / ((l2 as number) - (l1 as number)) })
    return value.kind === 'value' ? value.value : Number.NaN
  }
  expect(residualLatencyUncertainty({ distalDistanceMm: 80, segmentDistanceMm: 215, timeMs: 4 }, stated)).toBeCloseTo(numerically(rule, [5.2, 9.2, 80, 215], [0.1, 0.1, 5, 5]), 5)
})

it('an F-wave velocity', () => {
  const rule = ([d, f, m]: number[]) => 2 * (d as number) / ((f as number) - (m as number) - 1)
  const value = fWaveVelocity({ distanceMm: 650, minimumMs: 26, mLatencyMs: 3 }, stated)
  expect(value.kind === 'value' && value.uncertainty).toBeCloseTo(numerically(rule, [650, 26, 3], [5, 0.1, 0.1]), 4)
})

it.each([[1, 0.1], [2, 0.1414], [6, 0.2449]])('a sum or difference of %i latencies', (count, expected) => expect(latencySumUncertainty(count, 0.1)).toBeCloseTo(expected, 4))
it('nothing stated, nothing propagated', () => {
  expect(velocityUncertainty({ velocityMps: 50, distanceMm: 250, timeMs: 5, cursors: 2 }, { distanceMm: 0, latencyMs: 0 })).toBe(0)
  expect(conductionVelocity({ distanceMm: 250, proximalLatencyMs: 9, distalLatencyMs: 4 })).toEqual({ kind: 'value', value: 50 })
})
