import { describe, expect, it } from 'vitest'
import type { Entry, Run, RunRow } from '#shared/schemas/study'
import type { Side } from '#shared/schemas/common'
import { run } from '../study-maker'
import { cardLimits, criterionOf, has, outcome, patternOf, patternsOf, said, sensory, truths, type Given, type Limit } from './pattern-maker'

/** Site with amplitude (mV), area (mV ms) and duration (ms). */
type Site = [site: string, amplitude: Entry | undefined, area?: Entry, duration?: Entry]
const motor = (technique: string, side: Side, sites: Site[]): Run => run(technique, side, sites.map(([site, amplitudeMv, areaMvMs, durationMs]) =>
  [site, Object.fromEntries(Object.entries({ amplitudeMv, areaMvMs, durationMs }).filter(([, value]) => value !== undefined)) as RunRow['values']]))
const median = (sites: Site[]) => motor('median-motor-apb', 'right', sites)
const change = (runs: Run[], given: Given = {}) => patternOf('change-between-sites-2010', runs, { limits: cardLimits, ...given }, 'right')
const of = (pattern: ReturnType<typeof change>, nerve = 'median-motor-apb') =>
  Object.fromEntries((['definite', 'probable', 'dispersion', 'ratio'] as const).map(id => [id, criterionOf(pattern, `${nerve}/${id}`).result]))

describe('motor response between sites', () => {
  const rows: [name: string, proximal: Site, wanted: Record<string, string>, label: string][] = [
    ['no change', ['elbow', 9.8, 29, 5.2], { definite: 'not-met', probable: 'not-met', dispersion: 'not-met', ratio: 'not-met' }, 'not-met: none'],
    ['area falls by exactly 50 %, duration by exactly 30 % more', ['elbow', 6, 15, 6.5], { definite: 'met', probable: 'met', dispersion: 'not-met', ratio: 'not-met' }, 'met: definite: median'],
    ['area falls by 49.9 %', ['elbow', 6, 15.03, 6.5], { definite: 'not-met', probable: 'met', dispersion: 'not-met', ratio: 'not-met' }, 'met: at least probable: median'],
    ['area falls by 30 % over the forearm', ['elbow', 8, 21, 6.5], { definite: 'not-met', probable: 'met', dispersion: 'not-met', ratio: 'not-met' }, 'met: at least probable: median'],
    ['area falls by 29.9 %', ['elbow', 8, 21.03, 5.2], { definite: 'not-met', probable: 'not-met', dispersion: 'not-met', ratio: 'not-met' }, 'not-met: none'],
    ['area falls by 40 % with a longer response', ['elbow', 8, 18, 6.6], { definite: 'not-met', probable: 'not-met', dispersion: 'met', ratio: 'not-met' }, 'met: dispersion: median'],
    ['area falls by 60 % with a longer response', ['elbow', 4, 12, 6.6], { definite: 'not-met', probable: 'met', dispersion: 'met', ratio: 'met' }, 'met: at least probable: median; dispersion: median; amplitude ratio: median'],
    ['area falls by 60 %, durations not typed', ['elbow', 6, 12, undefined], { definite: 'not-assessable', probable: 'met', dispersion: 'not-assessable', ratio: 'not-met' }, 'met: at least probable: median'],
    ['areas not typed', ['elbow', 6, undefined, 5.2], { definite: 'not-assessable', probable: 'not-assessable', dispersion: 'not-met', ratio: 'not-met' }, 'not-assessable: none in what could be assessed'],
    ['response lost', ['elbow', 'no-response', 'no-response', 'no-response'], { definite: 'not-assessable', probable: 'met', dispersion: 'not-assessable', ratio: 'met' }, 'met: at least probable: median; amplitude ratio: median'],
    ['ratio exactly 0.5', ['elbow', 5, 29, 5.2], { definite: 'not-met', probable: 'not-met', dispersion: 'not-met', ratio: 'not-met' }, 'not-met: none'],
    ['ratio 0.49', ['elbow', 4.9, 29, 5.2], { definite: 'not-met', probable: 'not-met', dispersion: 'not-met', ratio: 'met' }, 'met: amplitude ratio: median'],
  ]
  for (const [name, proximal, wanted, label] of rows) {
    it(`${name}: ${label}`, () => {
      const pattern = change([median([['wrist', 10, 30, proximal[3] === undefined ? undefined : 5], proximal])])
      expect(of(pattern)).toEqual(wanted)
      expect(outcome(pattern)).toBe(label)
    })
  }

  it('says the numbers of the pair', () => {
    const pattern = change([median([['wrist', 10, 30, 5], ['elbow', 4, 12, 6]])])
    expect(said(pattern, 'median-motor-apb/definite')).toBe('met: wrist to elbow: area fall 60 %, duration rise 20 %, distal 10.0 mV')
    expect(said(pattern, 'median-motor-apb/ratio')).toBe('met: wrist to elbow: ratio 0.40, limit 0.5 at 10.0 mV')
  })

  it('the ratio limit depends on the distal amplitude: 0.36 up to 1 mV', () => {
    const ratio = (distal: number, proximal: number) => said(change([median([['wrist', distal], ['elbow', proximal]])]), 'median-motor-apb/ratio')
    expect(ratio(1, 0.4)).toBe('not-met: wrist to elbow: ratio 0.40, limit 0.36 at 1.0 mV')
    expect(ratio(1, 0.36)).toBe('not-met: wrist to elbow: ratio 0.36, limit 0.36 at 1.0 mV')
    expect(ratio(1, 0.35)).toBe('met: wrist to elbow: ratio 0.35, limit 0.36 at 1.0 mV')
    expect(ratio(1.01, 0.5)).toBe('met: wrist to elbow: ratio 0.495, limit 0.5 at 1.01 mV')
  })

  it('a definite change needs more than 1 mV and more than 20 % of the lower limit at the distal site', () => {
    const definite = (distal: number, limits: readonly Limit[] = cardLimits) => said(change([median([['wrist', distal, 30, 5], ['elbow', distal / 3, 10, 5]])], { limits }), 'median-motor-apb/definite')
    expect(definite(1)).toMatch(/^not-met: .*distal 1\.0 mV$/)
    expect(definite(1.1)).toMatch(/^met/)
    const high: Limit[] = [['median-motor-apb', 'amplitudeMv', 'wrist', 'lower', 10]]
    expect(definite(2, high)).toMatch(/^not-met/)
    expect(definite(2.1, high)).toMatch(/^met/)
    expect(definite(5, [])).toBe('not-assessable:  [amplitude: no limit: no set adopted here]')
  })

  it('every pair counts: what no neighbours show, the whole way may', () => {
    const radial = motor('radial-motor-eip', 'right', [['forearm', 5.4, 26.9], ['elbow', 3.8, 17.9], ['axilla', 2.1, 10.2]])
    const pattern = change([radial], { limits: [] })
    expect(said(pattern, 'radial-motor-eip/probable')).toBe('met: forearm to axilla: area fall 62 %')
    expect(said(pattern, 'radial-motor-eip/definite')).toMatch(/^not-assessable/)
    expect(criterionOf(pattern, 'radial-motor-eip/definite')).toMatchObject({ basis: 'derived', text: expect.stringMatching(/nerve not named by the source/) })
  })

  it('over the elbow or the leg half of the area is asked for, over forearm or upper arm 30 %', () => {
    const ulnar = change([motor('ulnar-motor-adm', 'right', [['below-elbow', 10, 30, 5], ['above-elbow', 8, 20, 5]])])
    expect(of(ulnar, 'ulnar-motor-adm').probable).toBe('not-met')
    expect(of(change([motor('ulnar-motor-adm', 'right', [['above-elbow', 10, 30, 5], ['axilla', 8, 20, 5]])]), 'ulnar-motor-adm').probable).toBe('met')
    expect(of(change([motor('fibular-motor-edb', 'right', [['ankle', 5, 30, 5], ['below-fibular-head', 4, 20, 5]])]), 'fibular-motor-edb').probable).toBe('not-met')
  })

  it('the setting leaves out pairs across entrapment sites, and the result says how it stands', () => {
    const runs = [motor('ulnar-motor-adm', 'right', [['wrist', 10, 30, 5], ['below-elbow', 9.8, 29, 5], ['above-elbow', 3, 10, 5], ['axilla', 2.9, 9.8, 5]])]
    const [off, on] = [change(runs), change(runs, { policy: { leaveOutEntrapmentSites: true } })]
    expect(of(off, 'ulnar-motor-adm')).toMatchObject({ definite: 'met', ratio: 'met' })
    expect(said(off, 'ulnar-motor-adm/definite')).toContain('below elbow to above elbow')
    expect(of(on, 'ulnar-motor-adm')).toMatchObject({ definite: 'not-met', probable: 'not-met', ratio: 'not-met' })
    expect([said(off, 'entrapment-sites'), said(on, 'entrapment-sites')]).toEqual(['not-met: off', 'met: on'])
    const only = change([motor('ulnar-motor-adm', 'right', [['below-elbow', 10, 30, 5], ['above-elbow', 3, 10, 5]])], { policy: { leaveOutEntrapmentSites: true } })
    expect(said(only, 'ulnar-motor-adm/ratio')).toBe('not-assessable:  [no pair of sites is left]')
  })

  it('is not asked of the tibial nerve, nor of one site', () => {
    expect(has(patternsOf([motor('tibial-motor-ah', 'right', [['ankle', 10, 30, 5], ['popliteal-fossa', 4, 12, 5]])]), 'change-between-sites-2010', 'right')).toBe(false)
    expect(has(patternsOf([median([['wrist', 10, 30, 5]])]), 'change-between-sites-2010', 'right')).toBe(false)
  })

  it('cold', () => {
    const pattern = change([median([['wrist', 10, 30, 5], ['elbow', 3, 10, 5]])], { study: { temperatures: [] } })
    expect(said(pattern, 'median-motor-apb/definite')).toBe('not-assessable:  [cold: no temperature of the RIGHT hand]')
  })
  it('no response at the distal site', () => {
    const pattern = change([median([['wrist', 'no-response', 'no-response'], ['elbow', 3, 10, 5]])])
    expect(Object.values(of(pattern))).toEqual(['not-assessable', 'not-assessable', 'not-assessable', 'not-assessable'])
    expect(criterionOf(pattern, 'median-motor-apb/ratio').because).toBe('amplitude no response')
  })
})

describe('multifocal motor neuropathy, electrical part', () => {
  const limits: Limit[] = [...cardLimits, ['median-sensory-d2', 'amplitudeUv', 'wrist', 'lower', 11], ['ulnar-sensory-d5', 'amplitudeUv', 'wrist', 'lower', 10], ['sural', 'amplitudeUv', 'calf', 'lower', 4]]
  const mmn = (runs: Run[], given: Given = {}) => patternOf('mmn-efns-pns-2010', runs, { limits, ...given })
  const blocked = (technique = 'median-motor-apb', side: Side = 'right') => motor(technique, side, technique === 'median-motor-apb' ? [['wrist', 10, 30, 5], ['elbow', 4, 12, 5]] : [['wrist', 10, 30, 5], ['below-elbow', 4, 12, 5]])
  const normalSensory = [sensory('median-sensory-d2', 'right', { amplitude: 20 }), sensory('ulnar-sensory-d5', 'right', { amplitude: 20 }), sensory('sural', 'right', { amplitude: 9 })]

  it('definite with a normal sensory study of the same nerve', () => {
    const pattern = mmn([blocked(), ...normalSensory])
    expect(outcome(pattern)).toBe('met: definite block with normal sensory conduction')
    expect(truths(pattern)).toEqual({ 'definite': 'met', 'probable': 'met', 'sensory': 'met', 'definite-2003': 'not-assessable', 'sensory-2003': 'met' })
    expect(said(pattern, 'sensory')).toBe('met: RIGHT median amplitude 20.0 µV, limit 11 µV')
  })
  it('two nerves and three sensory ones by the rule of 2003', () => {
    expect(truths(mmn([blocked(), blocked('ulnar-motor-adm'), ...normalSensory]))).toMatchObject({ 'definite-2003': 'met', 'sensory-2003': 'met' })
    expect(said(mmn([blocked(), ...normalSensory.slice(0, 2)]), 'sensory-2003')).toBe('not-assessable:  [2 sensory nerves studied]')
  })
  it('an abnormal sensory study of the same nerve speaks against it', () => {
    const pattern = mmn([blocked(), sensory('median-sensory-d2', 'right', { amplitude: 5 }), ...normalSensory.slice(1)])
    expect(outcome(pattern)).toBe('not-met: definite block, sensory conduction abnormal')
    expect(said(pattern, 'sensory-2003')).toBe('not-met: abnormal: RIGHT median')
  })
  it('without a sensory study it stays open', () => expect(outcome(mmn([blocked()]))).toBe('not-assessable: definite block, sensory conduction not assessable'))
  it('a change across the elbow alone is not one', () => {
    const runs = [motor('ulnar-motor-adm', 'right', [['below-elbow', 10, 30, 5], ['above-elbow', 4, 12, 5]]), median([['wrist', 10, 30, 5], ['elbow', 9.8, 29, 5]])]
    expect(outcome(mmn(runs))).toBe('not-met: no definite block')
  })
  it('probable only, or open', () => {
    expect(outcome(mmn([median([['wrist', 10, 30, 5], ['elbow', 8, 20, 5]])]))).toBe('not-met: at least probable block, none definite')
    expect(outcome(mmn([median([['wrist', 10, 30], ['elbow', 4, 12]])]))).toBe('not-assessable: at least probable block; definite not assessable')
    expect(outcome(mmn([median([['wrist', 10], ['elbow', 4]])]))).toBe('not-assessable: no block in what could be assessed')
  })
  it('is not shown without two sites of a named nerve', () => {
    expect(has(patternsOf([motor('tibial-motor-ah', 'right', [['ankle', 10, 30, 5], ['popliteal-fossa', 4, 12, 5]])]), 'mmn-efns-pns-2010')).toBe(false)
    expect(has(patternsOf([median([['wrist', 10, 30, 5]])]), 'mmn-efns-pns-2010')).toBe(false)
  })
})
