import { distances } from './distances'
import type { QuantityId } from './quantities'
import type { StimulationSite, Technique } from './types'

/**
 * Sensory and mixed studies. In each row the distance runs from the stimulus to the recording electrode.
 * Standard distances: digits, sural, superficial fibular, saphenous and plantar 140 mm, thumb 100 mm, antebrachial and
 * superficial radial 100 mm, dorsal ulnar and palmar mixed 80 mm (the shipped reference sets; thumb, ring finger and
 * palm as in the combined sensory index: Lew et al., Muscle Nerve 2000;23:1261-1264); dorsal sural 120 mm (common
 * practice). Roots: common practice.
 */
const sensoryColumns: QuantityId[] = ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'durationMs', 'distanceMm', 'stimulusMa']

const palm: StimulationSite = { id: 'palm', label: 'palm', standardDistanceMm: 70, segmentMm: distances.palm }
const wrist: StimulationSite = { id: 'wrist', label: 'wrist', usual: true, segmentMm: distances.distalSensory, segment: { id: 'wrist-palm', label: 'wrist to palm', entrapment: true } }
const elbow: StimulationSite = { id: 'elbow', label: 'elbow', segmentMm: distances.longSensory, segment: { id: 'forearm', label: 'forearm' } }
const belowElbow: StimulationSite = { id: 'below-elbow', label: 'below elbow', segmentMm: distances.longSensory, segment: { id: 'forearm', label: 'forearm' } }
const aboveElbow: StimulationSite = { id: 'above-elbow', label: 'above elbow', segmentMm: distances.longSensory, segment: { id: 'across-elbow', label: 'across the elbow', entrapment: true } }
const only = (id: string, label: string): StimulationSite[] => [{ id, label, usual: true, segmentMm: distances.distalSensory }]

const medianDigit = [palm, wrist, elbow]
const ulnarDigit = [palm, wrist, belowElbow, aboveElbow]

type Entry = Omit<Technique, 'kind' | 'quantities' | 'direction' | 'amplitudeDefinition'> & { kind?: 'mixed', direction?: 'orthodromic' }
const sensory = (entry: Entry): Technique =>
  ({ kind: 'sensory', direction: 'antidromic', ...entry, amplitudeDefinition: 'onset-to-peak', quantities: sensoryColumns })

const hand = { limb: 'arm', temperatureSegment: 'hand' } as const
const foot = { limb: 'leg', temperatureSegment: 'foot' } as const

export const sensoryTechniques: readonly Technique[] = [
  sensory({
    id: 'median-sensory-d1', nerve: 'median', label: 'median sensory, digit 1', roots: 'C6', ...hand,
    recording: { id: 'd1', label: 'digit 1', short: 'D1' }, standardDistanceMm: 100, sites: [wrist],
  }),
  sensory({
    id: 'median-sensory-d2', nerve: 'median', label: 'median sensory, digit 2', roots: 'C6, C7', ...hand,
    recording: { id: 'd2', label: 'digit 2', short: 'D2' }, standardDistanceMm: 140, sites: medianDigit,
  }),
  sensory({
    id: 'median-sensory-d3', nerve: 'median', label: 'median sensory, digit 3', roots: 'C7', ...hand,
    recording: { id: 'd3', label: 'digit 3', short: 'D3' }, standardDistanceMm: 140, sites: medianDigit,
    withoutLimits: 'No shipped set has limits for digit 3; digit 2 has them.',
  }),
  sensory({
    id: 'median-sensory-d4', nerve: 'median', label: 'median sensory, digit 4', roots: 'C7, C8', ...hand,
    recording: { id: 'd4', label: 'digit 4', short: 'D4' }, standardDistanceMm: 140, sites: medianDigit,
  }),
  sensory({
    id: 'median-mixed-palm', nerve: 'median', label: 'median mixed, palm to wrist', roots: 'C6 to T1', ...hand, kind: 'mixed', direction: 'orthodromic',
    recording: { id: 'wrist', label: 'wrist', short: 'wrist' }, standardDistanceMm: 80,
    sites: [{ id: 'palm', label: 'palm', usual: true, segmentMm: distances.palm }],
  }),
  sensory({
    id: 'ulnar-sensory-d4', nerve: 'ulnar', label: 'ulnar sensory, digit 4', roots: 'C8', ...hand,
    recording: { id: 'd4', label: 'digit 4', short: 'D4' }, standardDistanceMm: 140, sites: ulnarDigit,
  }),
  sensory({
    id: 'ulnar-sensory-d5', nerve: 'ulnar', label: 'ulnar sensory, digit 5', roots: 'C8, T1', ...hand,
    recording: { id: 'd5', label: 'digit 5', short: 'D5' }, standardDistanceMm: 140, sites: ulnarDigit,
  }),
  sensory({
    id: 'ulnar-mixed-palm', nerve: 'ulnar', label: 'ulnar mixed, palm to wrist', roots: 'C8, T1', ...hand, kind: 'mixed', direction: 'orthodromic',
    recording: { id: 'wrist', label: 'wrist', short: 'wrist' }, standardDistanceMm: 80,
    sites: [{ id: 'palm', label: 'palm', usual: true, segmentMm: distances.palm }],
  }),
  sensory({
    id: 'ulnar-sensory-dorsal', nerve: 'dorsal-ulnar', label: 'dorsal ulnar sensory', roots: 'C8', ...hand,
    recording: { id: 'dorsal-hand', label: 'dorsum of the hand, web of digits 4 and 5', short: 'dorsum' }, standardDistanceMm: 80, sites: only('forearm', 'forearm'),
  }),
  sensory({
    id: 'radial-sensory-snuffbox', nerve: 'superficial-radial', label: 'superficial radial sensory', roots: 'C6, C7', ...hand,
    recording: { id: 'snuffbox', label: 'anatomical snuffbox', short: 'snuffbox' }, standardDistanceMm: 100, sites: only('forearm', 'forearm'),
  }),
  sensory({
    id: 'radial-sensory-d1', nerve: 'superficial-radial', label: 'superficial radial sensory, digit 1', roots: 'C6', ...hand,
    recording: { id: 'd1', label: 'digit 1', short: 'D1' }, standardDistanceMm: 100, sites: only('wrist', 'wrist'),
  }),
  sensory({
    id: 'lateral-antebrachial', nerve: 'lateral-antebrachial', label: 'lateral antebrachial sensory', roots: 'C5, C6', ...hand,
    recording: { id: 'lateral-forearm', label: 'lateral forearm', short: 'forearm' }, standardDistanceMm: 100, sites: only('elbow', 'elbow'),
  }),
  sensory({
    id: 'medial-antebrachial', nerve: 'medial-antebrachial', label: 'medial antebrachial sensory', roots: 'C8, T1', ...hand,
    recording: { id: 'medial-forearm', label: 'medial forearm', short: 'forearm' }, standardDistanceMm: 100, sites: only('elbow', 'elbow'),
  }),
  sensory({
    id: 'sural', nerve: 'sural', label: 'sural sensory', roots: 'S1, S2', ...foot,
    recording: { id: 'lateral-malleolus', label: 'behind the lateral malleolus', short: 'ankle' }, standardDistanceMm: 140, sites: only('calf', 'calf'),
  }),
  sensory({
    id: 'dorsal-sural', nerve: 'dorsal-sural', label: 'dorsal sural sensory', roots: 'S1', ...foot,
    recording: { id: 'lateral-foot', label: 'lateral dorsum of the foot', short: 'foot' }, standardDistanceMm: 120, sites: only('ankle', 'behind the lateral malleolus'),
  }),
  sensory({
    id: 'superficial-fibular', nerve: 'superficial-fibular', label: 'superficial fibular sensory', roots: 'L4 to S1', ...foot,
    recording: { id: 'lateral-ankle', label: 'lateral ankle', short: 'ankle' }, standardDistanceMm: 140, sites: only('lower-leg', 'lateral lower leg'),
  }),
  sensory({
    id: 'saphenous', nerve: 'saphenous', label: 'saphenous sensory', roots: 'L3, L4', ...foot,
    recording: { id: 'medial-ankle', label: 'medial ankle', short: 'ankle' }, standardDistanceMm: 140, sites: only('lower-leg', 'medial lower leg'),
  }),
  sensory({
    id: 'medial-plantar', nerve: 'medial-plantar', label: 'medial plantar mixed', roots: 'L4 to S1', ...foot, kind: 'mixed', direction: 'orthodromic',
    recording: { id: 'medial-malleolus', label: 'behind the medial malleolus', short: 'ankle' }, standardDistanceMm: 140, sites: only('sole', 'medial sole'),
  }),
  sensory({
    id: 'lateral-plantar', nerve: 'lateral-plantar', label: 'lateral plantar mixed', roots: 'S1, S2', ...foot, kind: 'mixed', direction: 'orthodromic',
    recording: { id: 'medial-malleolus', label: 'behind the medial malleolus', short: 'ankle' }, standardDistanceMm: 140, sites: only('sole', 'lateral sole'),
  }),
]
