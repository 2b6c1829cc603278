import ucum from '@lhncbc/ucum-lhc'
import { describe, expect, it } from 'vitest'
import { referenceTables } from '#reference-tables/index'
import { comparisons, sideDifferenceId, techniquesNeeded } from '#shared/catalogue/comparisons'
import { anyQuantity, computedQuantities } from '#shared/catalogue/computed-quantities'
import { nerveLabels, siteOf, techniqueOf, techniqueTitle, techniques } from '#shared/catalogue/nerves'
import { quantities, type Quantity } from '#shared/catalogue/quantities'
import { protocols } from '#shared/protocols'

const ids = [
  'median-motor-apb', 'median-motor-lumbrical', 'ulnar-motor-adm', 'ulnar-motor-fdi', 'ulnar-motor-interosseous', 'radial-motor-eip', 'musculocutaneous-motor-biceps',
  'axillary-motor-deltoid', 'facial-motor-nasalis', 'fibular-motor-edb', 'fibular-motor-ta', 'tibial-motor-ah', 'tibial-motor-adq', 'femoral-motor-quadriceps',
  'median-sensory-d1', 'median-sensory-d2', 'median-sensory-d3', 'median-sensory-d4', 'median-mixed-palm', 'ulnar-sensory-d4', 'ulnar-sensory-d5', 'ulnar-mixed-palm',
  'ulnar-sensory-dorsal', 'radial-sensory-snuffbox', 'radial-sensory-d1', 'lateral-antebrachial', 'medial-antebrachial', 'sural', 'dorsal-sural', 'superficial-fibular',
  'saphenous', 'medial-plantar', 'lateral-plantar', 'median-f-apb', 'ulnar-f-adm', 'fibular-f-edb', 'tibial-f-ah', 'h-reflex-soleus', 'h-reflex-fcr',
  'repetitive-ulnar-adm', 'repetitive-facial-nasalis', 'repetitive-accessory-trapezius', 'blink',
]
const typed: Record<string, Quantity> = quantities
const limitRows = referenceTables.flatMap(table => table.rows).filter(row => row.use === 'limit')

describe('the catalogue', () => {
  it.each(ids)('has %s: ids never change', (id) => {
    expect(techniqueOf(id)?.id).toBe(id)
  })

  it('has every id and every label once', () => {
    for (const key of ['id', 'label'] as const) {
      const all = techniques.map(technique => technique[key])
      expect(all.filter((one, index) => all.indexOf(one) !== index)).toEqual([])
    }
  })

  it('knows no other technique', () => {
    expect(techniqueOf('median-motor')).toBeUndefined()
    expect(siteOf('median-motor-apb', 'ankle')).toBeUndefined()
    expect(siteOf('nothing', 'wrist')).toBeUndefined()
    expect(siteOf('ulnar-motor-adm', 'above-elbow')?.segment?.id).toBe('across-elbow')
  })

  it.each(techniques)('$id has words, roots, sites and known quantities', (technique) => {
    expect(nerveLabels[technique.nerve]).toBeTruthy()
    for (const word of [technique.label, technique.roots, technique.recording.id, technique.recording.label, technique.recording.short]) expect(word).not.toBe('')
    expect(technique.sites.some(site => site.usual)).toBe(true)
    expect(new Set(technique.sites.map(site => site.id)).size).toBe(technique.sites.length)
    expect(technique.quantities.filter(id => !typed[id])).toEqual([])
    expect(technique.quantities.length + (technique.ordinals?.length ?? 0)).toBeGreaterThan(0)
  })

  it.each(techniques.filter(({ kind }) => ['motor', 'sensory', 'mixed'].includes(kind)))('$id has a distance range at every site, wide enough for its standard distance', (technique) => {
    for (const site of technique.sites) {
      expect(site.segmentMm, site.id).toBeDefined()
      const { possibleMin, usualMin, usualMax, possibleMax } = site.segmentMm!
      expect([possibleMin, usualMin, usualMax, possibleMax]).toEqual([possibleMin, usualMin, usualMax, possibleMax].sort((a, b) => a - b))
      expect(possibleMin).toBeGreaterThanOrEqual(quantities.distanceMm.possible.min)
      expect(possibleMax).toBeLessThanOrEqual(quantities.distanceMm.possible.max)
    }
    const first = technique.sites.find(site => site.usual)!
    if (technique.standardDistanceMm) {
      expect(technique.standardDistanceMm).toBeGreaterThanOrEqual(first.segmentMm!.usualMin)
      expect(technique.standardDistanceMm).toBeLessThanOrEqual(first.segmentMm!.usualMax)
    }
  })

  it.each(techniques.filter(({ kind }) => kind === 'motor'))('$id names the segment at every site but the most distal', (technique) => {
    expect(technique.sites[0]!.segment).toBeUndefined()
    expect(technique.sites.slice(1).every(site => site.segment ?? site.aside)).toBe(true)
  })

  /** Usual adult distances: common practice. */
  it.each([
    ['median-motor-apb', 'elbow', 150, 320], ['ulnar-motor-adm', 'below-elbow', 150, 320], ['ulnar-motor-adm', 'above-elbow', 80, 140], ['median-motor-apb', 'axilla', 100, 280],
    ['fibular-motor-edb', 'below-fibular-head', 220, 450], ['fibular-motor-edb', 'above-fibular-head', 60, 140], ['tibial-motor-ah', 'popliteal-fossa', 300, 500],
  ])('%s at %s: %i to %i mm is usual', (technique, site, usualMin, usualMax) => {
    expect(siteOf(technique, site)?.segmentMm).toMatchObject({ usualMin, usualMax })
  })

  it.each(techniques)('$id has a limit in some shipped set, or says why it has none', (technique) => {
    const rests = limitRows.some(row => techniquesNeeded(row.technique!).includes(technique.id))
    expect(rests || !!technique.withoutLimits, 'Add rows to a reference table, or `withoutLimits` to the technique.').toBe(true)
    expect(rests && !!technique.withoutLimits, 'A set has limits for it: take `withoutLimits` away.').toBe(false)
  })

  it('serves every protocol', () => {
    expect(protocols.flatMap(protocol => protocol.runs).filter(run => !techniqueOf(run.technique))).toEqual([])
  })

  it('says the recording site once in a title', () => {
    expect(techniqueTitle(techniqueOf('median-motor-apb')!)).toBe('median motor, abductor pollicis brevis')
    expect(techniqueTitle(techniqueOf('ulnar-motor-fdi')!)).toBe('ulnar motor, first dorsal interosseous')
    expect(techniqueTitle(techniqueOf('median-sensory-d2')!)).toBe('median sensory, digit 2')
    expect(techniqueTitle(techniqueOf('tibial-f-ah')!)).toBe('tibial F-wave, abductor hallucis')
  })
})

describe('comparisons', () => {
  it.each(comparisons)('$id compares known techniques in known quantities', (comparison) => {
    expect(techniqueOf(comparison.first)).toBeDefined()
    expect(techniqueOf(comparison.second)).toBeDefined()
    expect(comparison.quantities.filter(id => !computedQuantities[id])).toEqual([])
  })

  it('names the techniques it rests on', () => {
    expect(techniquesNeeded(sideDifferenceId('sural'))).toEqual(['sural'])
    expect(techniquesNeeded('sural-radial')).toEqual(['sural', 'radial-sensory-snuffbox'])
    expect(techniquesNeeded('sural')).toEqual(['sural'])
    expect(techniquesNeeded('combined-sensory-index').sort()).toEqual(['median-mixed-palm', 'median-sensory-d1', 'median-sensory-d4', 'radial-sensory-d1', 'ulnar-mixed-palm', 'ulnar-sensory-d4'])
  })
})

describe('quantities', () => {
  const utils = ucum.UcumLhcUtils.getInstance()
  const all = [...Object.values(typed), ...Object.values(computedQuantities)]

  it.each(all)('$id: $ucum is a UCUM code', (quantity) => {
    expect(utils.validateUnitString(quantity.ucum)).toMatchObject({ status: 'valid', ucumCode: quantity.ucum })
  })

  it.each(all)('$id has the unit people read beside the code machines read', (quantity) => {
    const forPeople = quantity.ucum === '1' ? '' : quantity.ucum.replace('uV', '\u00B5V').replace('mV.ms', 'mV·ms')
    expect(quantity.unit).toBe(forPeople)
    expect(anyQuantity(quantity.id)).toEqual(quantity)
  })

  it('are typed or computed, never both', () => {
    expect(Object.keys(typed).filter(id => computedQuantities[id])).toEqual([])
    expect(anyQuantity('nothing')).toBeUndefined()
  })
})
