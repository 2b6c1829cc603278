import { describe, expect, it } from 'vitest'
import { checkEntry } from '#server/services/check-entry'
import { siteOf, techniques } from '#shared/catalogue/nerves'
import { quantities } from '#shared/catalogue/quantities'
import { parseEntry } from '../../../../app/utils/grid-entry'
import { assess, run, studyWith } from '../calculations/study-maker'

/** Distances around every edge of every segment: grid, server and library must agree on what is stopped. */
const places = techniques.filter(({ kind }) => ['motor', 'sensory', 'mixed'].includes(kind)).flatMap(technique => technique.sites.map(site => ({ technique, site })))
const edges = ({ possibleMin, possibleMax }: { possibleMin: number, possibleMax: number }) => [1, 9, 33, 59, 60, 79, 80, possibleMin - 1, possibleMin, possibleMax, possibleMax + 1, 901]

describe('one rule for what a distance can be', () => {
  it.each(places)('$technique.id at $site.id', ({ technique, site }) => {
    for (const mm of edges(site.segmentMm!)) {
      const grid = parseEntry(String(mm), quantities.distanceMm, { site: siteOf(technique.id, site.id) }).kind === 'stop'
      const server = checkEntry(technique, site.id, 'distanceMm', mm) !== null
      const recorded = run(technique.id, 'right', [[technique.sites[0]!.id === site.id ? 'x' : technique.sites[0]!.id, {}], [site.id, { distanceMm: mm }]])
      const library = assess(studyWith([recorded])).remarks.some(remark => remark.strength === 'stop' && remark.quantity === 'distanceMm')
      expect([mm, grid, library], `${mm} mm`).toEqual([mm, server, server])
    }
  })
})
