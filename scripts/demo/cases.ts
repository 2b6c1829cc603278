import type { Side } from '#shared/schemas/common'
import type { Absence } from '#shared/schemas/study'
import { typed, type Random } from './random'

/**
 * Invented clinical pictures: for each the words of the referral, the protocol, and a generator of typed values.
 * The numbers are made up to look like such studies; they are nobody's measurements.
 */
export type Value = number | Absence
export type RowValues = Record<string, Value>
export interface MadeRun { technique: string, side: Side, rows: Record<string, RowValues> }

export interface ClinicalPicture {
  id: string
  weight: number
  protocol: string
  question: string[]
  symptoms: string[]
  examination: string[]
  diagnosis: string
  side: (random: Random) => 'right' | 'left' | 'both'
  nerve: string
  limb: 'hand' | 'foot' | 'both'
  /** How ill the nerve is, 0 to 1, for one run. */
  severity: (technique: string, random: Random) => number
  /** The same in German, for a physician who gets the reports in that language. */
  german: (side: 'right' | 'left' | 'both') => string
  impression: (side: 'right' | 'left' | 'both') => { words: string, nerve: string | null, side: 'right' | 'left' | 'both' | null, abnormal: boolean }[]
}

const RIGHT_LEFT = { right: 'RIGHT', left: 'LEFT', both: 'RIGHT and LEFT' }
const RECHTS_LINKS = { right: 'RECHTS', left: 'LINKS', both: 'beidseits' }
const anySide = (random: Random) => random.pick(['right', 'left', 'both'] as const)

export const pictures: ClinicalPicture[] = [
  {
    id: 'median-wrist', weight: 38, protocol: 'carpal-tunnel', nerve: 'median', limb: 'hand', side: anySide,
    question: ['Carpal tunnel?', 'Median neuropathy at the wrist, how severe?', 'Night-time tingling: carpal tunnel?'],
    symptoms: ['Numb thumb to middle fingers at night for six months.', 'Tingling hands when driving, dropping things.', 'Burning pain in the hand, wakes at night.'],
    examination: ['Reduced touch on digits 1 to 3, no wasting.', 'Thenar strength slightly reduced.', 'Sensation and power normal.'],
    diagnosis: 'Carpal tunnel syndrome',
    severity: (technique, random) => technique.startsWith('median') ? random.between(0.15, 0.9) : 0,
    german: side => `Läsion des N. medianus am Handgelenk ${RECHTS_LINKS[side]}.`,
    impression: side => [{ words: `${RIGHT_LEFT[side]} median neuropathy at the wrist.`, nerve: 'median', side, abnormal: true }],
  },
  {
    id: 'normal-arm', weight: 22, protocol: 'carpal-tunnel', nerve: 'median', limb: 'hand', side: anySide,
    question: ['Carpal tunnel?', 'Hand tingling, neck or wrist?'],
    symptoms: ['Tingling in all fingers, worse at the computer.', 'Neck pain and tingling hand.'],
    examination: ['Normal power, reflexes and sensation.'],
    diagnosis: 'Carpal tunnel syndrome',
    severity: () => 0,
    german: () => 'Neurographie der untersuchten Nerven innerhalb der Grenzwerte.',
    impression: () => [{ words: 'Nerve conduction of the nerves studied is within limits.', nerve: null, side: null, abnormal: false }],
  },
  {
    id: 'ulnar-elbow', weight: 14, protocol: 'ulnar-elbow', nerve: 'ulnar', limb: 'hand', side: random => random.pick(['right', 'left'] as const),
    question: ['Ulnar neuropathy at the elbow?', 'Numb little finger: elbow or wrist?'],
    symptoms: ['Numb ring and little finger for three months, leans on the elbow.', 'Weak grip, numb little finger.'],
    examination: ['Reduced touch on digit 5, first dorsal interosseous slightly weak.'],
    diagnosis: 'Ulnar neuropathy at the elbow',
    severity: (technique, random) => technique.startsWith('ulnar') ? random.between(0.4, 0.9) : 0,
    german: side => `Läsion des N. ulnaris am Ellenbogen ${RECHTS_LINKS[side]}.`,
    impression: side => [{ words: `${RIGHT_LEFT[side]} ulnar neuropathy at the elbow.`, nerve: 'ulnar', side, abnormal: true }],
  },
  {
    id: 'polyneuropathy', weight: 18, protocol: 'polyneuropathy', nerve: 'sural', limb: 'both', side: () => 'both',
    question: ['Polyneuropathy?', 'Diabetes, numb feet: polyneuropathy?'],
    symptoms: ['Numb, burning feet for two years, unsteady in the dark.', 'Tingling toes, worse at night.'],
    examination: ['Ankle reflexes absent, vibration reduced at the toes.'],
    diagnosis: 'Length-dependent polyneuropathy',
    severity: (technique, random) => /sural|fibular|tibial/.test(technique) ? random.between(0.35, 1) : random.between(0, 0.35),
    german: () => 'Längenabhängige sensomotorische Polyneuropathie der Beine.',
    impression: () => [{ words: 'Length-dependent sensorimotor polyneuropathy of the legs.', nerve: 'sural', side: 'both', abnormal: true }],
  },
  {
    id: 'fibular-head', weight: 8, protocol: 'foot-drop', nerve: 'fibular', limb: 'foot', side: random => random.pick(['right', 'left'] as const),
    question: ['Foot drop: fibular nerve or L5?'],
    symptoms: ['Foot drop for two weeks after kneeling work.'],
    examination: ['Ankle dorsiflexion 3 of 5, inversion normal.'],
    diagnosis: 'Fibular (peroneal) neuropathy at the knee',
    severity: (technique, random) => technique.includes('fibular') ? random.between(0.5, 0.95) : 0,
    german: side => `Läsion des N. fibularis am Fibulakopf ${RECHTS_LINKS[side]}.`,
    impression: side => [{ words: `${RIGHT_LEFT[side]} fibular neuropathy at the fibular head.`, nerve: 'fibular', side, abnormal: true }],
  },
]

/** A motor run: distal latency, velocities per segment and amplitude, worsened by severity. */
function motor(random: Random, severity: number, base: { latency: number, amplitude: number, velocity: number, standardMm: number, segments: { site: string, mm: [number, number], slow?: number }[], distalSite: string, gone?: boolean }): Record<string, RowValues> {
  if (base.gone) return { [base.distalSite]: { latencyMs: 'no-response', amplitudeMv: 'no-response', distanceMm: base.standardMm } }
  let latency = typed(random.normal(base.latency, 0.25), 1)
  let amplitude = Math.max(0.3, random.normal(base.amplitude, base.amplitude * 0.15))
  const rows: Record<string, RowValues> = { [base.distalSite]: { latencyMs: latency, amplitudeMv: typed(amplitude, 1), durationMs: typed(random.normal(5.6, 0.4), 1), distanceMm: base.standardMm } }
  for (const segment of base.segments) {
    const distance = Math.round(random.between(...segment.mm) / 5) * 5
    const velocity = Math.max(18, random.normal(base.velocity, 2.5) * (1 - severity * (segment.slow ?? 0)))
    latency = typed(latency + distance / velocity, 1)
    amplitude *= random.between(0.94, 0.99) * (1 - severity * (segment.slow ?? 0) * 0.3)
    rows[segment.site] = { latencyMs: latency, amplitudeMv: typed(amplitude, 1), durationMs: typed(random.normal(5.8, 0.4), 1), distanceMm: distance }
  }
  return rows
}

function sensory(random: Random, severity: number, base: { onset: number, amplitude: number, mm: number, site: string, slow?: number }): Record<string, RowValues> {
  if (severity * (base.slow ?? 0.35) > 0.31) return { [base.site]: { onsetLatencyMs: 'no-response', peakLatencyMs: 'no-response', amplitudeUv: 'no-response', distanceMm: base.mm } }
  const onset = typed(random.normal(base.onset, 0.12) * (1 + severity * (base.slow ?? 0.35)), 1)
  return { [base.site]: { onsetLatencyMs: onset, peakLatencyMs: typed(onset + random.between(0.55, 0.75), 1), amplitudeUv: typed(Math.max(1, random.normal(base.amplitude, base.amplitude * 0.2) * (1 - 0.8 * severity)), base.amplitude > 10 ? 0 : 1), distanceMm: base.mm } }
}

/** Values for one run of a technique; null when the demonstration has no picture of it. */
export function makeRows(technique: string, severity: number, random: Random, focus: 'wrist' | 'elbow' | 'knee' | 'length'): Record<string, RowValues> | null {
  const s = severity
  switch (technique) {
    case 'median-motor-apb': return motor(random, s, { distalSite: 'wrist', latency: 3.3 + s * 3, amplitude: 9 - s * 5, velocity: 56 - s * 3, standardMm: 80, segments: [{ site: 'elbow', mm: [200, 245] }] })
    case 'ulnar-motor-adm': return motor(random, s, { distalSite: 'wrist', latency: 2.8, amplitude: 10.5 - s * 2, velocity: 59, standardMm: 80, segments: [{ site: 'below-elbow', mm: [190, 230] }, { site: 'above-elbow', mm: [95, 105], slow: focus === 'elbow' ? 0.5 : 0.05 }] })
    case 'fibular-motor-edb': return motor(random, s, { distalSite: 'ankle', latency: 4.6 + s * 0.6, amplitude: Math.max(0.4, 5 - s * 4), velocity: 47 - s * 6, standardMm: 80, gone: focus === 'length' && s > 0.92, segments: [{ site: 'below-fibular-head', mm: [300, 350] }, { site: 'above-fibular-head', mm: [90, 110], slow: focus === 'knee' ? 0.5 : 0.02 }] })
    case 'fibular-motor-ta': return motor(random, s, { distalSite: 'below-fibular-head', latency: 3.2, amplitude: 5, velocity: 52, standardMm: 100, segments: [{ site: 'above-fibular-head', mm: [90, 110], slow: focus === 'knee' ? 0.5 : 0.02 }] })
    case 'tibial-motor-ah': return motor(random, s, { distalSite: 'ankle', latency: 4.2 + s * 0.8, amplitude: Math.max(0.6, 12 - s * 9), velocity: 47 - s * 6, standardMm: 80, segments: [{ site: 'popliteal-fossa', mm: [370, 430] }] })
    case 'median-sensory-d2': return sensory(random, s, { site: 'wrist', onset: 2.7, amplitude: 34, mm: 140, slow: focus === 'wrist' ? 0.36 : 0.2 })
    case 'ulnar-sensory-d5': return sensory(random, s, { site: 'wrist', onset: 2.6, amplitude: 24, mm: 140, slow: 0.2 })
    case 'sural': return sensory(random, s, { site: 'calf', onset: 3.1, amplitude: 14, mm: 140, slow: 0.36 })
    case 'superficial-fibular': return sensory(random, s, { site: 'lower-leg', onset: 2.9, amplitude: 12, mm: 140, slow: 0.3 })
    default: return null
  }
}
