import { expect, it } from 'vitest'
import { decrement, keepsFalling } from '#shared/calculations/decrement'
import type { Entry } from '#shared/schemas/study'

/** Invented trains, mV. */
const trains: [name: string, train: Entry[], percent: number | string][] = [
  ['first to fourth', [8, 6.9, 6.4, 6.2, 6.3], 22.5],
  ['a rise is negative', [8, 8.2, 8.3, 8.4], -5],
  ['responses between may be missing', [8, 'technical', 'technical', 6], 25],
  ['fourth missing', [8, 7, 6], 'first or fourth response missing'],
  ['fourth not recordable', [8, 7, 6, 'technical'], 'first or fourth response missing'],
  ['first not recordable', ['technical', 7, 6, 5], 'first or fourth response missing'],
  ['first is 0', [0, 0, 0, 0], 'the first response is not above 0'],
  ['first below 0', [-1, 0, 0, 1], 'the first response is not above 0'],
]
it.each(trains)('decrement: %s', (_, train, wanted) => {
  const found = decrement(train)
  if (typeof wanted === 'number') expect(found.kind === 'value' ? found.value : found).toBeCloseTo(wanted, 9)
  else expect(found).toEqual({ kind: 'not-computable', because: wanted })
})

const falling: [name: string, train: (Entry | undefined)[], wanted: boolean][] = [
  ['to the last of six', [8, 7, 6, 5, 4, 3], true],
  ['five are too few to tell', [8, 7, 6, 5, 4], false],
  ['level at the end', [8, 7, 6, 5, 4, 4], false],
  ['level at the beginning', [8, 8, 6, 5, 4, 3], false],
  ['recovers at the end', [8, 7, 6, 5, 4, 4.1], false],
  ['one response not recordable', [8, 7, 'technical', 5, 4, 3], false],
  ['the last not recordable', [8, 7, 6, 5, 4, 'technical'], false],
  ['the first not recordable', ['technical', 7, 6, 5, 4, 3], false],
  ['none recordable', ['technical', 'technical', 'technical', 'technical', 'technical', 'technical'], false],
]
it.each(falling)('keeps falling: %s', (_, train, wanted) => expect(keepsFalling(train)).toBe(wanted))
