import { describe, expect, it } from 'vitest'
import { limitBarGeometry, limitBarSvg, limitBarText } from '../../../../shared/plots/limit-bar'
import { printColours } from '../../../../shared/plots/tokens'
import { limitText, limitWords, markOf } from '../../../../shared/plots/verdict-words'
import { limit, outside, result, within } from './results'

const width = 100
const latencyLimit = limit('upper', 4.4, 'ms', 'woman, 50 to 79')
const velocityLimit = limit('lower', 51, 'm/s')

describe('the limit lies visibly inside, whatever the quantity', () => {
  const table = [
    { quantity: 'latencyMs', unit: 'ms', limits: [latencyLimit] },
    { quantity: 'velocityMps', unit: 'm/s', limits: [velocityLimit] },
    { quantity: 'amplitudeUv', unit: 'µV', limits: [limit('lower', 7, 'µV')] },
    { quantity: 'amplitudeMv', unit: 'mV', limits: [limit('lower', 0.8, 'mV')] },
    { quantity: 'onsetDifferenceMs', unit: 'ms', limits: [limit('upper', 0.5, 'ms')] },
    { quantity: 'amplitudeRatio', unit: '', limits: [limit('lower', 0.4, '')] },
    { quantity: 'onsetDifferenceMs', unit: 'ms', limits: [limit('upper', 0, 'ms')] },
    { quantity: 'latencyMs', unit: 'ms', limits: [limit('lower', 2, 'ms'), limit('upper', 6, 'ms')] },
  ]
  it.each(table)('$quantity $unit $limits.0.value', ({ quantity, unit, limits }) => {
    for (const mirrored of [false, true]) {
      const bar = limitBarGeometry(result(quantity, unit, limits[0]!.value, within(limits)), { width, mirrored })!
      for (const tick of bar.ticks) {
        expect(tick).toBeGreaterThan(15)
        expect(tick).toBeLessThan(85)
      }
    }
  })
})

describe('the mark lies on the side of its limit that the verdict says', () => {
  const table = [
    { name: 'latency above', r: result('latencyMs', 'ms', 5.2, outside('above', latencyLimit)), right: true },
    { name: 'latency within', r: result('latencyMs', 'ms', 3.9, within([latencyLimit])), right: false },
    { name: 'velocity below', r: result('velocityMps', 'm/s', 43, outside('below', velocityLimit), 2), right: false },
    { name: 'velocity within', r: result('velocityMps', 'm/s', 54, within([velocityLimit]), 2), right: true },
    { name: 'negative difference', r: result('onsetDifferenceMs', 'ms', -0.1, within([limit('upper', 0.5, 'ms')])), right: false },
  ]
  it.each(table)('$name', ({ r, right }) => {
    const bar = limitBarGeometry(r, { width })!
    const mirrored = limitBarGeometry(r, { width, mirrored: true })!
    expect(bar.mark!.x > bar.ticks[0]!).toBe(right)
    expect(mirrored.mark!.x).toBeCloseTo(width - bar.mark!.x)
    expect(mirrored.allowed.x).toBeCloseTo(width - bar.allowed.x - bar.allowed.width)
  })
})

describe('values off the scale are clamped and drawn as an arrow', () => {
  const table = [
    { value: 40, mirrored: false, side: 'right' }, { value: 40, mirrored: true, side: 'left' },
    { value: 0.4, mirrored: false, side: 'left' }, { value: 0.4, mirrored: true, side: 'right' },
    { value: 4.4, mirrored: false, side: null },
  ]
  it.each(table)('latency $value against 4.4, mirrored $mirrored', ({ value, mirrored, side }) => {
    const { mark } = limitBarGeometry(result('latencyMs', 'ms', value, within([latencyLimit])), { width, mirrored })!
    expect(mark!.beyondScale).toBe(side)
    expect(mark!.x).toBeGreaterThanOrEqual(3)
    expect(mark!.x).toBeLessThanOrEqual(97)
  })
})

it('the whisker spans the uncertainty around the mark', () => {
  const bar = limitBarGeometry(result('velocityMps', 'm/s', 54, within([velocityLimit]), 2), { width })!
  expect((bar.whisker!.from + bar.whisker!.to) / 2).toBeCloseTo(bar.mark!.x, 1)
  const wider = limitBarGeometry(result('velocityMps', 'm/s', 54, within([velocityLimit]), 4), { width })!
  expect(wider.whisker!.to - wider.whisker!.from).toBeCloseTo(2 * (bar.whisker!.to - bar.whisker!.from), 1)
})

it('an absent response has limits and no mark; what was not judged has no bar', () => {
  expect(limitBarGeometry(result('amplitudeUv', 'µV', null, { kind: 'absent', limits: [limit('lower', 7, 'µV')] }), { width })!.mark).toBeNull()
  expect(limitBarGeometry(result('latencyMs', 'ms', 4, { kind: 'no-limit', because: 'no set adopted here' }), { width })).toBeNull()
  expect(limitBarSvg(result('latencyMs', 'ms', 4, { kind: 'not-judged', because: 'height missing' }), { width, colours: printColours })).toBe('')
})

describe('in words', () => {
  const table = [
    { r: result('latencyMs', 'ms', 5.2, outside('above', latencyLimit)), text: '5.2 ms, above the upper limit 4.4 ms (woman, 50 to 79)', mark: '▲', words: '≤ 4.4' },
    { r: result('velocityMps', 'm/s', 50, outside('below', velocityLimit, true), 2), text: '50 ± 2 m/s, below the lower limit 51 m/s, by less than its measurement uncertainty', mark: '▼', words: '≥ 51' },
    { r: result('velocityMps', 'm/s', 52, within([velocityLimit], true), 2), text: '52 ± 2 m/s, within the lower limit 51 m/s, closer to it than its measurement uncertainty', mark: '≈', words: '≥ 51' },
    { r: result('amplitudeUv', 'µV', null, { kind: 'absent', limits: [limit('lower', 7, 'µV')] }), text: 'no response, there is a limit: the lower limit 7 µV', mark: '▼', words: '≥ 7' },
    { r: result('latencyMs', 'ms', 4, { kind: 'no-limit', because: 'age 17 is outside 19 to 79' }), text: '4 ms, no limit: age 17 is outside 19 to 79', mark: '', words: '' },
    { r: result('latencyMs', 'ms', 4, { kind: 'not-judged', because: 'height missing' }), text: '4 ms, not judged: height missing', mark: '', words: '' },
  ]
  it.each(table)('$text', ({ r, text, mark, words }) => {
    expect(limitBarText(r)).toBe(text)
    expect(markOf(r)).toBe(mark)
    expect(limitWords(r)).toBe(words)
  })
  it.each([
    { value: 42.42, unit: 'm/s', quantity: 'velocityMps', print: '42.42' },
    { value: 51, unit: 'm/s', quantity: 'velocityMps', print: '51' },
    { value: 4, unit: 'ms', quantity: 'latencyMs', print: '4.0' },
    { value: 0.2 + 0.4 + 0.3, unit: 'ms', quantity: 'combinedIndexMs', print: '0.9' },
  ])('limit $value prints $print', ({ value, unit, quantity, print }) => {
    expect(limitText(limit('lower', value, unit), quantity)).toBe(print)
  })
})

it('the SVG text carries the given colours, an outline on the shaded part, and no script', () => {
  const svg = limitBarSvg(result('latencyMs', 'ms', 5.2, outside('above', latencyLimit)), { width, colours: printColours })
  expect(svg).toContain(`fill="${printColours.beyond}"`)
  expect(svg).toMatch(/<rect[^>]*stroke-width="0.5"/)
  expect(svg).not.toMatch(/NaN|undefined|var\(|<script/)
})
