import type { Run, Study } from '#shared/schemas/study'
import { run } from '../study-maker'
import { cardLimits, motorNerve, sensory, type Limit, type Motor, type NerveNumbers } from './pattern-maker'

/** Studies of nobody for whole check lists: those of the card, and limits of four sensory nerves. */
export const limits: readonly Limit[] = [
  ...cardLimits,
  ['sural', 'amplitudeUv', 'calf', 'lower', 4], ['sural', 'velocityMps', 'calf', 'lower', 40], ['median-sensory-d2', 'amplitudeUv', 'wrist', 'lower', 10], ['median-sensory-d2', 'velocityMps', 'wrist', 'lower', 50],
  ['ulnar-sensory-d5', 'amplitudeUv', 'wrist', 'lower', 8], ['radial-sensory-snuffbox', 'amplitudeUv', null, 'lower', 7],
]

const normal: Record<Motor, NerveNumbers> = {
  median: { dml: 4, mcv: 52, amp: 8, proximalAmp: 7.8, f: 28, duration: 5.5, proximalDuration: 5.8, filterHz: 20 },
  ulnar: { dml: 3, mcv: 55, amp: 8, proximalAmp: 7.8, f: 28, duration: 5.5, proximalDuration: 5.8, filterHz: 20 },
  fibular: { dml: 5, mcv: 45, amp: 4, proximalAmp: 3.8, f: 50, duration: 5.5, proximalDuration: 5.8, filterHz: 20 },
  tibial: { dml: 5, mcv: 44, amp: 8, proximalAmp: 6.8, f: 50, duration: 5.5, proximalDuration: 6, filterHz: 20 },
}
const nerves = (study: Partial<Record<Motor, NerveNumbers>>): Run[] => (Object.entries(study) as [Motor, NerveNumbers][]).flatMap(([nerve, numbers]) => motorNerve(nerve, 'right', numbers))
const silent: NerveNumbers = { dml: 'no-response', amp: 'no-response' }
const sural = sensory('sural', 'right', { onset: 3, amplitude: 10 })
const areas = (technique: string, ...sites: [site: string, amplitudeMv: number | 'no-response', areaMvMs: number | undefined, durationMs: number | undefined][]) =>
  run(technique, 'right', sites.map(([site, amplitudeMv, areaMvMs, durationMs]) => [site, { amplitudeMv, ...(areaMvMs !== undefined && { areaMvMs }), ...(durationMs !== undefined && { durationMs }) }]))

export const studies = {
  'something of each': { runs: [...nerves({
    median: { ...normal.median, dml: 7, f: 'no-response' },
    ulnar: { ...normal.ulnar, mcv: 34, proximalAmp: 3, duration: 9, proximalDuration: 12 },
    fibular: { ...normal.fibular, f: 80, dml: 11 },
    tibial: { ...normal.tibial, amp: 0.7, proximalAmp: 0.3, dml: 'technical' },
  }), sural], study: {} },
  'velocities and F-waves left out': { runs: [...nerves({ ulnar: { amp: 4, proximalAmp: 3.8 }, tibial: { amp: 3, proximalAmp: 2.9 } }), sural], study: {} },
  'cold': { runs: [...nerves({ ulnar: normal.ulnar, median: normal.median }), sural], study: { temperatures: [] } },
  'silent': { runs: [...nerves({ ulnar: { ...silent, f: 'no-response' }, tibial: silent }), sural], study: {} },
  'one nerve answers': { runs: nerves({ ulnar: { ...normal.ulnar, amp: 0.4, proximalAmp: 0.3 }, tibial: silent }), study: {} },
  'no limits': { runs: [...nerves({ ulnar: normal.ulnar, tibial: normal.tibial }), sural], study: {} },
  'sensory': { runs: [
    ...nerves({ ulnar: { ...normal.ulnar, proximalAmp: 3 }, median: normal.median }), sural,
    sensory('median-sensory-d2', 'right', { onset: 3, amplitude: 5 }), sensory('radial-sensory-snuffbox', 'right', { onset: 'no-response', amplitude: 'no-response' }, 100), sensory('ulnar-sensory-d5', 'right', { onset: 3, peak: 4, amplitude: 15 }),
  ], study: {} },
  'areas': { runs: [
    areas('median-motor-apb', ['wrist', 8, 24, 5], ['elbow', 3, 9, 5.5]), areas('ulnar-motor-adm', ['wrist', 8, 24, 5], ['below-elbow', 6, 16, 5.5], ['above-elbow', 2, 4, 5.5]), areas('fibular-motor-edb', ['ankle', 4, 12, 5], ['below-fibular-head', 3.8, 11, 5]),
    sensory('median-sensory-d2', 'right', { onset: 2.5, amplitude: 15 }), sensory('ulnar-sensory-d5', 'right', { onset: 3, amplitude: 7 }), sural,
  ], study: {} },
  'areas lost': { runs: [areas('median-motor-apb', ['wrist', 8, 24, 5], ['elbow', 'no-response', undefined, undefined]), areas('ulnar-motor-adm', ['wrist', 8, undefined, 5], ['below-elbow', 6, undefined, 7])], study: {} },
} as const satisfies Record<string, { runs: Run[], study: Partial<Study> }>
