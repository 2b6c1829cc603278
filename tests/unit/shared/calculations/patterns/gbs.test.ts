import { describe, expect, it } from 'vitest'
import type { Run } from '#shared/schemas/study'
import { run } from '../study-maker'
import { cardLimits, criterionOf, motorNerve, outcome, patternOf, said, sensory, truths, type Given, type Limit, type Motor, type NerveNumbers } from './pattern-maker'

type Study = Partial<Record<Motor, NerveNumbers>>
const runsOf = (study: Study) => (Object.entries(study) as [Motor, NerveNumbers][]).flatMap(([nerve, numbers]) => motorNerve(nerve, 'right', numbers))
const set = (id: string) => (study: Study | Run[], given: Given = {}) => patternOf(id, Array.isArray(study) ? study : runsOf(study), { limits: cardLimits, ...given })
const [ho, hadden, rajabally] = ['gbs-ho-1995', 'gbs-hadden-1998', 'gbs-rajabally-2015'].map(set) as [ReturnType<typeof set>, ReturnType<typeof set>, ReturnType<typeof set>]

/** Normal by all three sets; limits are those of the card. */
const normal: Record<Motor, NerveNumbers> = {
  median: { dml: 4, mcv: 52, amp: 8, proximalAmp: 7.8, f: 28, duration: 5.5, proximalDuration: 5.8 },
  ulnar: { dml: 3, mcv: 55, amp: 8, proximalAmp: 7.8, f: 28, duration: 5.5, proximalDuration: 5.8 },
  fibular: { dml: 5, mcv: 45, amp: 4, proximalAmp: 3.8, f: 50, duration: 5.5, proximalDuration: 5.8 },
  tibial: { dml: 5, mcv: 44, amp: 8, proximalAmp: 7.2, f: 50, duration: 5.5, proximalDuration: 6 },
}
const but = (changes: Study): Study => Object.fromEntries((Object.keys(normal) as Motor[]).map(nerve => [nerve, { ...normal[nerve], ...changes[nerve] }]))
const silent: NerveNumbers = { dml: 'no-response', amp: 'no-response' }

describe('the same numbers, three sets', () => {
  const rows: [name: string, changes: Study, ho: string, hadden: string, rajabally: string][] = [
    ['normal', {}, 'not demyelinating', 'normal', 'neither demyelinating nor axonal'],
    ['velocity under 90 % and latency above 110 %', { ulnar: { mcv: 44 }, tibial: { dml: 6.8 } }, 'demyelinating', 'primary demyelinating', 'neither demyelinating nor axonal'],
    ['exactly 90 % and exactly 110 %', { ulnar: { mcv: 45 }, tibial: { dml: 6.6 } }, 'not demyelinating', 'normal', 'neither demyelinating nor axonal'],
    ['one nerve only', { ulnar: { mcv: 44, dml: 4.5 } }, 'not demyelinating', 'equivocal', 'neither demyelinating nor axonal'],
    ['F above 120 % in two', { ulnar: { f: 38.5 }, tibial: { f: 70 } }, 'demyelinating', 'primary demyelinating', 'demyelinating'],
    ['F exactly 120 % in two', { ulnar: { f: 38.4 }, tibial: { f: 69.6 } }, 'not demyelinating', 'normal', 'neither demyelinating nor axonal'],
    ['velocity under 70 % in two', { ulnar: { mcv: 34.9 }, tibial: { mcv: 28 } }, 'demyelinating', 'primary demyelinating', 'demyelinating'],
    ['latency above 150 % in two', { ulnar: { dml: 5.5 }, tibial: { dml: 9.1 } }, 'demyelinating', 'primary demyelinating', 'demyelinating'],
    ['falls above 50 % in two', { ulnar: { proximalAmp: 3.9 }, median: { proximalAmp: 3.9 } }, 'not demyelinating', 'primary demyelinating', 'axonal'],
    ['falls of exactly 50 % in two', { ulnar: { proximalAmp: 4 }, median: { proximalAmp: 4 } }, 'not demyelinating', 'normal', 'axonal'],
    ['falls in two and velocity in a third', { ulnar: { proximalAmp: 5 }, median: { proximalAmp: 5 }, fibular: { mcv: 28 } }, 'not demyelinating', 'equivocal', 'demyelinating'],
    ['long proximal responses in two', { ulnar: { proximalDuration: 7.3 }, median: { proximalDuration: 7.3 } }, 'demyelinating', 'normal', 'neither demyelinating nor axonal'],
    ['small responses in two', { ulnar: { amp: 3.9, proximalAmp: 3.8 }, tibial: { amp: 3.1, proximalAmp: 3 } }, 'not demyelinating', 'primary axonal', 'axonal'],
    ['exactly 80 % in one of two', { ulnar: { amp: 3.9, proximalAmp: 3.8 }, tibial: { amp: 3.2, proximalAmp: 3 } }, 'not demyelinating', 'equivocal', 'neither demyelinating nor axonal'],
    ['no F-waves in two', { ulnar: { f: 'no-response' }, tibial: { f: 'no-response' } }, 'not demyelinating', 'normal', 'axonal'],
    ['no F-waves in two and velocity in a third', { ulnar: { f: 'no-response' }, tibial: { f: 'no-response' }, fibular: { mcv: 28 } }, 'not demyelinating', 'equivocal', 'demyelinating'],
    ['no F-wave in one, small response in another', { ulnar: { f: 'no-response' }, tibial: { amp: 3.1, proximalAmp: 3 } }, 'not demyelinating', 'equivocal', 'axonal'],
  ]
  for (const [name, changes, byHo, byHadden, byRajabally] of rows) {
    it(`${name}: Ho ${byHo}`, () => expect(ho(but(changes)).outcome.label).toBe(byHo))
    it(`${name}: Hadden ${byHadden}`, () => expect(hadden(but(changes)).outcome.label).toBe(byHadden))
    it(`${name}: Rajabally ${byRajabally}`, () => expect(rajabally(but(changes)).outcome.label).toBe(byRajabally))
  }
})

describe('Ho 1995', () => {
  it('a low amplitude asks for more: 85 % of velocity under 50 %, 120 % of latency under the limit', () => {
    const velocity = (mcv: number, amp: number) => truths(ho(but({ ulnar: { mcv, amp, proximalAmp: amp } }))).velocity
    expect([velocity(44, 2.5), velocity(44, 2.4), velocity(42.5, 2.4), velocity(42.4, 2.4)]).toEqual(['met', 'not-met', 'not-met', 'met'])
    const latency = (dml: number, amp: number) => truths(ho(but({ ulnar: { dml, amp, proximalAmp: amp } }))).latency
    expect([latency(4.1, 5), latency(4.1, 4.9), latency(4.32, 4.9), latency(4.33, 4.9)]).toEqual(['met', 'not-met', 'not-met', 'met'])
    expect(said(ho(but({ ulnar: { mcv: 42.4, amp: 2.4, proximalAmp: 2.4 } })), 'velocity')).toContain('RIGHT ulnar 42.4 m/s, 84.8 % of 50 m/s (low amplitude: bar 85 %)')
  })
  it('the axonal part is shown and decides nothing', () => {
    const limits: Limit[] = [...cardLimits, ['sural', 'amplitudeUv', 'calf', 'lower', 6]]
    const runs = [...runsOf(but({ ulnar: { amp: 3.9, proximalAmp: 3.8 } })), sensory('sural', 'right', { amplitude: 2.9 })]
    const pattern = ho(runs, { limits })
    expect(outcome(pattern)).toBe('not-met: not demyelinating')
    expect(truths(pattern)).toMatchObject({ 'axonal': 'met', 'axonal-sensory': 'met' })
    expect(criterionOf(pattern, 'axonal').basis).toBe('memory')
    expect(truths(ho([...runsOf(but({})), sensory('sural', 'right', { amplitude: 3 })], { limits }))).toMatchObject({ 'axonal': 'not-met', 'axonal-sensory': 'not-met' })
    expect(said(ho([...runsOf(but({})), sensory('sural', 'right', { onset: 'no-response', amplitude: 'no-response' })], { limits }), 'axonal-sensory')).toBe('met: RIGHT sural')
    expect(said(ho(but({})), 'axonal-sensory')).toBe('not-assessable:  [no sensory nerve studied]')
    expect(said(ho(runs), 'axonal-sensory')).toMatch(/^not-assessable: .*no limit: /)
  })
  it('what was not recorded keeps "not demyelinating" open', () => {
    const short: Study = { ulnar: { dml: 3, mcv: 55, amp: 8 }, tibial: { dml: 5, mcv: 44, amp: 8 } }
    expect(outcome(ho(short))).toBe('not-assessable: not demyelinating in what could be assessed')
    expect(criterionOf(ho(short), 'f-latency').because).toBe('not recorded in any nerve')
    expect(ho({ ulnar: { ...short.ulnar, mcv: 44 }, tibial: { ...short.tibial, dml: 6.8 } }).outcome.met).toBe('met')
  })
  it('the setting leaves out the elbow, the fibular head and the median latency at the wrist', () => {
    const limits: Limit[] = [...cardLimits, ['ulnar-motor-adm', 'velocityMps', 'across-elbow', 'lower', 50]]
    const elbow = run('ulnar-motor-adm', 'right', [['wrist', { latencyMs: 3, amplitudeMv: 8, distanceMm: 80 }], ['below-elbow', { latencyMs: 7, amplitudeMv: 8, distanceMm: 220 }], ['above-elbow', { latencyMs: 10, amplitudeMv: 7.8, distanceMm: 100 }]])
    const runs = [elbow, ...runsOf({ median: { ...normal.median, dml: 5.2 }, tibial: normal.tibial })]
    const [off, on] = [ho(runs, { limits }), ho(runs, { limits, policy: { leaveOutEntrapmentSites: true } })]
    expect(truths(off)).toMatchObject({ 'velocity': 'met', 'latency': 'met', 'demyelinating': 'met', 'entrapment-sites': 'not-met' })
    expect(truths(on)).toMatchObject({ 'velocity': 'not-met', 'latency': 'not-met', 'demyelinating': 'not-met', 'entrapment-sites': 'met' })
    expect(said(off, 'velocity')).toContain('across the elbow 33.3 m/s, 67 % of 50 m/s')
  })
  it('cold', () => {
    const pattern = ho(but({ ulnar: { mcv: 44 }, tibial: { dml: 6.8 } }), { study: { temperatures: [] } })
    expect(outcome(pattern)).toBe('not-assessable: not demyelinating in what could be assessed')
    expect(criterionOf(pattern, 'velocity').because).toContain('RIGHT median, RIGHT ulnar cold: no temperature of the RIGHT hand')
  })
})

describe('Hadden 1998', () => {
  it('inexcitable: no response anywhere, or in one nerve only under 10 %', () => {
    expect(hadden({ ulnar: silent, tibial: silent }).outcome).toEqual({ met: 'met', label: 'inexcitable' })
    expect(hadden({ ulnar: { ...normal.ulnar, amp: 0.49, proximalAmp: 0.4 }, tibial: silent }).outcome.label).toBe('inexcitable')
    expect(truths(hadden({ ulnar: { ...normal.ulnar, amp: 0.5, proximalAmp: 0.4 }, tibial: silent })).inexcitable).toBe('not-met')
  })
  it('two features in the one nerve that answers, at 10 % or more', () => {
    const one = (numbers: NerveNumbers) => hadden({ ulnar: { ...normal.ulnar, ...numbers }, tibial: silent, fibular: silent })
    expect(one({ mcv: 30, dml: 5, amp: 0.5, proximalAmp: 0.5 }).outcome.label).toBe('primary demyelinating')
    expect(one({ mcv: 30, amp: 0.5, proximalAmp: 0.5 }).outcome.label).not.toBe('primary demyelinating')
    expect(one({ mcv: 30, dml: 5, amp: 0.49, proximalAmp: 0.49 }).outcome.label).toBe('inexcitable')
  })
  it('axonal allows one feature in one nerve under 10 %', () => {
    const with_ = (amp: number, more: NerveNumbers = {}) => hadden(but({ ulnar: { amp, proximalAmp: amp, mcv: 40, ...more }, tibial: { amp: 3, proximalAmp: 2.9 } })).outcome.label
    expect(with_(0.49)).toBe('primary axonal')
    expect(with_(0.5)).toBe('equivocal')
    expect(with_(0.49, { dml: 5 })).toBe('equivocal')
  })
  it('a fall counts from 20 % of the lower limit on', () => {
    const fall = (amp: number) => truths(hadden(but({ ulnar: { amp, proximalAmp: amp * 0.4 } }))).fall
    expect([fall(1), fall(0.99)]).toEqual(['met', 'not-met'])
  })
  it('what was not recorded keeps the classes open', () => {
    const pattern = hadden({ ulnar: { dml: 3, mcv: 55, amp: 3, proximalAmp: 2.9 }, tibial: { dml: 5, mcv: 44, amp: 3, proximalAmp: 2.9 } })
    expect(truths(pattern)).toMatchObject({ 'f-latency': 'not-assessable', 'axonal': 'not-assessable', 'normal': 'not-met', 'demyelinating': 'not-assessable' })
    expect(outcome(pattern)).toBe('not-assessable: no class met in what could be assessed')
  })
})

describe('Rajabally 2015', () => {
  it('F above 120 % is not enough under 50 % of the amplitude', () => {
    const label = (f: number, amp: number) => rajabally(but({ ulnar: { f: 48.1 }, tibial: { f, amp, proximalAmp: amp } })).outcome.label
    expect([label(70, 2), label(70, 1.9), label(87.1, 1.9)]).toEqual(['demyelinating', 'neither demyelinating nor axonal', 'demyelinating'])
  })
  it('the tibial nerve does not count for falls', () => {
    expect(rajabally(but({ ulnar: { proximalAmp: 5 }, tibial: { proximalAmp: 2 }, fibular: { mcv: 28 } })).outcome.label).toBe('neither demyelinating nor axonal')
  })
  it('a fall of exactly 30 % is not above it', () => {
    expect(rajabally(but({ ulnar: { proximalAmp: 5.6 }, median: { proximalAmp: 5 } })).outcome.label).toBe('neither demyelinating nor axonal')
  })
  it('without F-waves it stays open', () => {
    const pattern = rajabally({ ulnar: { dml: 3, mcv: 44, amp: 6, proximalAmp: 5.8 }, tibial: { dml: 6.8, mcv: 44, amp: 5, proximalAmp: 4.8 } })
    expect(outcome(pattern)).toBe('not-assessable: not demyelinating in what could be assessed')
    expect(truths(pattern)).toMatchObject({ 'velocity': 'not-met', 'latency': 'not-met', 'f-absent': 'not-assessable' })
  })
})
