import type { StimulationSite } from '../../catalogue/types'
import { fallPercent, risePercent } from '../change-between-sites'
import { readingOf, type Facts, type Reading, type RunFacts } from './facts'

/** A change between two sites in per cent; a response lost on the way is a fall of 100 %. */
export interface Change { state: 'number' | 'missing', percent: number, because: string }

/** The response to stimulation at two sites of one nerve. Every pair counts, not only neighbours: which site is the reference decides what is found. */
export interface SitePair {
  from: StimulationSite
  to: StimulationSite
  /** "wrist to below elbow". */
  label: string
  /** A common entrapment site lies between them. */
  entrapment: boolean
  distalAmplitude: Reading
  amplitudeFall: Change
  areaFall: Change
  /** Of the negative peak. */
  durationRise: Change
}

interface SiteReadings { site: StimulationSite, place: number, amplitude: Reading, area: Reading, duration: Reading }

/** Every pair of sites of a motor run that were both stimulated, distal before proximal. */
export function sitePairs(facts: Facts, run: RunFacts): SitePair[] {
  if (run.cold) return []
  const { results } = run.assessment
  const places = run.technique.sites.map((site, place) => ({ site, place })).filter(({ site }) => results.some(result => result.at === site.id))
  const stimulated = places.map(({ site, place }): SiteReadings => ({
    site, place,
    amplitude: readingOf(facts, run, 'amplitudeMv', site.id),
    area: readingOf(facts, run, 'areaMvMs', site.id),
    duration: readingOf(facts, run, 'durationMs', site.id),
  })).filter(({ amplitude, area }) => isKnown(amplitude) || isKnown(area))
  const pairs: SitePair[] = []
  for (const [index, distal] of stimulated.entries()) {
    for (const proximal of stimulated.slice(index + 1)) pairs.push(pairOf(run, distal, proximal))
  }
  return pairs
}

const isKnown = (reading: Reading) => reading.state !== 'missing'

function pairOf({ technique }: RunFacts, distal: SiteReadings, proximal: SiteReadings): SitePair {
  const between = technique.sites.slice(distal.place + 1, proximal.place + 1)
  const lost = isAnswered(distal) && isSilent(proximal)
  return {
    from: distal.site, to: proximal.site, label: `${distal.site.label} to ${proximal.site.label}`,
    entrapment: between.some(site => site.segment?.entrapment),
    distalAmplitude: distal.amplitude,
    amplitudeFall: lost ? allLost : change(distal.amplitude, proximal.amplitude, 'amplitude', fallPercent),
    areaFall: lost ? allLost : change(distal.area, proximal.area, 'area', fallPercent),
    durationRise: lost ? unknownChange(`no response at ${proximal.site.label}`) : change(distal.duration, proximal.duration, 'duration', risePercent),
  }
}

const isAnswered = ({ amplitude, area }: SiteReadings) => amplitude.state === 'number' || area.state === 'number'
const isSilent = ({ amplitude, area }: SiteReadings) => amplitude.state === 'no-response' || area.state === 'no-response'
const allLost: Change = { state: 'number', percent: 100, because: '' }
const unknownChange = (because: string): Change => ({ state: 'missing', percent: Number.NaN, because })

function change(distal: Reading, proximal: Reading, what: string, rule: typeof fallPercent): Change {
  const gap = [distal, proximal].find(reading => reading.state !== 'number')
  if (gap) return unknownChange(`${what} ${gap.because}`)
  const value = rule({ distal: distal.value, proximal: proximal.value })
  return value.kind === 'value' ? { state: 'number', percent: value.value, because: '' } : unknownChange(value.kind === 'absent' ? 'no response' : value.because)
}
