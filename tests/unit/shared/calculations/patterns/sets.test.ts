import { describe, expect, it } from 'vitest'
import { isOn, patternSets } from '#shared/calculations/patterns'
import { defaultPolicy } from '#shared/calculations/types'
import { referenceTables } from '#reference-tables'
import { assessStudy } from '#shared/calculations/assess-study'
import { carpalTunnelStudy, ndtfPolicy } from '../../../../fixtures/carpal-tunnel-study'
import { cardLimits, has, motorNerve, patternsOf, pick, sensory, type Limit } from './pattern-maker'
import { run } from '../study-maker'

describe('the sets', () => {
  it('ids are unique and fit the drafts that name them', () => {
    const ids = patternSets.map(({ id }) => id)
    expect(new Set(ids).size).toBe(ids.length)
    expect(ids.filter(id => !/^[a-z0-9-]{3,64}$/.test(id))).toEqual([])
  })
  it.each(patternSets)('$id: version, source, and a basis for each criterion', ({ version, source, title, criteria, basis }) => {
    expect(version).toBeGreaterThanOrEqual(1)
    expect(title.length).toBeGreaterThan(5)
    expect(source).toMatch(/doi:10\.\d{4}|read\)|read in/)
    if (basis === 'memory') expect(source).toMatch(/recalled|from memory/)
    expect(criteria.length).toBeGreaterThan(0)
    expect(new Set(criteria.map(({ id }) => id)).size).toBe(criteria.length)
    for (const one of criteria) expect([one.text.length > 3, ['read', 'memory', 'derived'].includes(one.basis)]).toEqual([true, true])
  })
  it('those that rest on memory are off until turned on; the others are on', () => {
    const on = patternSets.filter(set => isOn(set, defaultPolicy)).map(({ id }) => id)
    expect(patternSets.filter(({ basis }) => basis === 'memory').map(({ id }) => id)).toEqual([
      'combined-sensory-index', 'ulnar-elbow-parameter-1999', 'cidp-ean-pns-2021', 'gbs-hadden-1998', 'gbs-rajabally-2015', 'length-dependent-2005',
    ])
    expect(on).toEqual(patternSets.filter(({ basis }) => basis !== 'memory').map(({ id }) => id))
    for (const set of patternSets) {
      expect(isOn(set, { patternsOn: [set.id], patternsOff: [] })).toBe(true)
      expect(isOn(set, { patternsOn: [set.id], patternsOff: [set.id] })).toBe(false)
    }
  })
  it('no criterion that decides a set that is on rests on memory, but for the neighbours marked "beside"', () => {
    const decidedByMemory = patternSets.filter(({ basis }) => basis !== 'memory').flatMap(({ id, criteria }) => criteria.filter(one => one.basis === 'memory' && !one.text.startsWith('Beside')).map(one => `${id} ${one.id}`))
    expect(decidedByMemory).toEqual(['split-hand-index below-5-2'])
  })
  it('the consensus table of 1999 on block is not among them', () => {
    const text = JSON.stringify(patternSets.map(({ id, title, source, criteria }) => ({ id, title, source, criteria })))
    expect(text).not.toMatch(/Olney RK, Muscle Nerve 1999|S225|consensus/i)
  })
})

describe('what is shown', () => {
  const runs = [...motorNerve('median', 'right', { dml: 5, amp: 8, mcv: 52 }), ...motorNerve('ulnar', 'right', { dml: 3, amp: 8, mcv: 55 }), sensory('median-sensory-d2', 'right', { onset: 4, amplitude: 9 })]
  it('nothing for an empty study, nor for what was left out', () => {
    expect(patternsOf([])).toEqual([])
    expect(patternsOf(runs.map(run => ({ ...run, notDoneBecause: 'no time' })))).toEqual([])
  })
  it('only sets whose nerves were studied', () => {
    expect(patternsOf(runs, { limits: cardLimits }).map(({ id, side }) => `${id} ${side ?? ''}`.trim())).toEqual([
      'bland-2000 right', 'padua-1997 right', 'cidp-efns-pns-2010', 'cidp-ean-pns-2021', 'gbs-ho-1995', 'gbs-hadden-1998', 'gbs-rajabally-2015',
    ])
  })
  it('a set that is turned off is gone', () => {
    expect(has(patternsOf(runs, { policy: { patternsOff: ['bland-2000'] } }), 'bland-2000', 'right')).toBe(false)
  })
  it('says when limits were used that nobody compared with the paper', () => {
    const recalled = assessStudy(carpalTunnelStudy(), referenceTables, ndtfPolicy).patterns
    expect(pick(recalled, 'bland-2000', 'right').source).toMatch(/Judged with limits that are recalled, not verified\.$/)
    const rows = referenceTables.find(({ id }) => id === 'aanem-ndtf-2016')?.rows.map(({ id }) => id) ?? []
    const verified = { ...ndtfPolicy, adopted: ndtfPolicy.adopted.map(one => ({ ...one, verifiedRows: rows })) }
    expect(pick(assessStudy(carpalTunnelStudy(), referenceTables, verified).patterns, 'bland-2000', 'right').source).not.toMatch(/recalled/)
  })
  it('side, version and basis go with the result', () => {
    expect(pick(patternsOf(runs), 'bland-2000', 'right')).toMatchObject({ version: 1, side: 'right', basis: 'read' })
    expect(pick(patternsOf(runs), 'cidp-ean-pns-2021')).toMatchObject({ version: 1, basis: 'memory' })
    expect('side' in pick(patternsOf(runs), 'cidp-ean-pns-2021')).toBe(false)
  })
})

/** What several sets ask is looked at once; a recalled limit in it counts for each of them, and for no other. */
describe('a set says the same alone as beside the others', () => {
  const recalled = { basis: 'from memory' } as const
  const legs: Limit[] = [
    ['fibular-motor-edb', 'velocityMps', 'across-fibular-head', 'lower', 41],
    ['sural', 'amplitudeUv', 'calf', 'lower', 4], ['superficial-fibular', 'amplitudeUv', 'lower-leg', 'lower', 4], ['median-sensory-d2', 'amplitudeUv', 'wrist', 'lower', 11],
  ]
  const only = (quantity: string): Limit[] => legs.map(([technique, what, at, bound, value]) => [technique, what, at, bound, value, what === quantity ? recalled : {}])
  const fibular = run('fibular-motor-edb', 'right', [['ankle', { latencyMs: 4, amplitudeMv: 5, distanceMm: 80 }], ['below-fibular-head', { latencyMs: 11, amplitudeMv: 4.8, distanceMm: 320 }], ['above-fibular-head', { latencyMs: 13, amplitudeMv: 4.7, distanceMm: 90 }]])
  const runs = [
    fibular, ...motorNerve('median', 'right', { dml: 5, amp: 8, mcv: 52 }), sensory('median-sensory-d2', 'right', { onset: 4, amplitude: 9 }),
    sensory('sural', 'right', { onset: 3, amplitude: 9 }), sensory('superficial-fibular', 'right', { onset: 3, amplitude: 9 }),
  ]
  const hand: Limit[] = cardLimits.map(([technique, what, at, bound, value]) => [technique, what, at, bound, value, technique.startsWith('median') ? recalled : {}])
  it.each<[name: string, limits: Limit[], recalledIn: string[]]>([
    ['the hand', hand, ['bland-2000', 'padua-1997']],
    ['a velocity that one set asks', only('velocityMps'), ['fibular-knee']],
    ['sensory amplitudes that many ask', only('amplitudeUv'), ['fibular-knee', 'mmn-efns-pns-2010', 'cidp-efns-pns-2010', 'length-dependent-2005']],
  ])('%s', (_, limits, recalledIn) => {
    const ids = patternSets.map(({ id }) => id)
    const together = patternsOf(runs, { limits })
    const alone = ids.flatMap(id => patternsOf(runs, { limits, policy: { patternsOff: ids.filter(other => other !== id) } }))
    expect(alone).toEqual(together)
    const saying = together.filter(({ source }) => source.includes('recalled, not verified.')).map(({ id }) => id)
    expect(saying).toEqual(expect.arrayContaining(recalledIn))
  })
})
