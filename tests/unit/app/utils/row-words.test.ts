import { expect, it } from 'vitest'
import { assess, run, studyWith } from '../../shared/calculations/study-maker'
import { barredResult, coldRow, resultWords, rowLimits } from '../../../../app/utils/row-words'
import { standardDistance, limbsWithoutTemperature } from '../../../../app/utils/run-labels'
import { techniqueOf } from '../../../../shared/catalogue/nerves'

const of = (...args: Parameters<typeof run>) => assess(studyWith([run(...args)])).runs[0]!.results
const plain = (text: string) => text.replaceAll('\u00A0', ' ')

it('a series of F-waves in words; chronodispersion only from ten responses on', () => {
  const ten = [27.9, 28.3, 28.8, 29.1, 28.0, 28.4, 28.6, 28.2, 29.4, 28.1]
  const words = (series: number[]) => resultWords(of('median-f-apb', 'right', [['wrist', {}, [...series, 'no-response']]])).map(each => plain(each.words))
  expect(words(ten)).toEqual(expect.arrayContaining(['mean 28.5 ms', 'longest 29.4 ms', 'persistence 91 %', 'chronodispersion 1.5 ms']))
  expect(words(ten.slice(1))).toContain('chronodispersion not computed: fewer than 10 responses')
})

it('the row of a motor run: its limits, and the bar of what is flagged', () => {
  const results = of('median-motor-apb', 'right', [['wrist', { latencyMs: 5.2, amplitudeMv: 8, distanceMm: 80 }]])
  expect(plain(rowLimits(results))).toMatch(/^latency ≤ 4\.\d, amplitude ≥ \d\.\d$/)
  expect(barredResult(results)?.quantity).toBe('latencyMs')
  expect(coldRow(results)).toBe('')
})

it.each([
  ['median-motor-apb', 'wrist', 0, 80], ['median-motor-apb', 'elbow', 1, undefined], ['ulnar-motor-adm', 'median-elbow', 3, undefined], ['ulnar-motor-adm-short', 'elbow-0', 2, 20], ['sural', 'calf', 0, 140],
])('the distance that a space puts in: %s at %s', (technique, site, index, mm) => {
  expect(standardDistance(techniqueOf(technique)!, { id: 'r', site, values: {} }, index)).toBe(mm)
})

it('limbs that are studied and have no temperature, RIGHT first', () => {
  const runs = [run('sural', 'left', [['calf', {}]]), run('median-motor-apb', 'right', [['wrist', {}]]), run('sural', 'right', [['calf', {}]], { notDoneBecause: 'oedema' }), run('blink', 'right', [['supraorbital', {}]])]
  expect(limbsWithoutTemperature({ runs, temperatures: [] })).toEqual([{ segment: 'hand', side: 'right' }, { segment: 'foot', side: 'left' }])
})
