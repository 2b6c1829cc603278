import type { ReferralSide, Side } from './schemas/common'

/**
 * Protocols by clinical question as the program ships them; what holds is the policy `protocols`: which runs to lay out. `side` 'asked' means each side the referral asks for,
 * 'both' both sides. Minimum sets that the medical director approves; rows marked "memory" are common practice.
 */
export interface Protocol {
  id: string
  label: string
  basis: string
  runs: { technique: string, side: 'asked' | 'both' }[]
}

export const protocols: Protocol[] = [
  {
    id: 'carpal-tunnel', label: 'Carpal tunnel',
    basis: 'Median sensory and motor with a comparison nerve in the same hand, hand temperature: AAEM/AAN/AAPMR practice parameter, Jablecki et al., Muscle Nerve 2002;25:918-922 (summary read).',
    runs: [
      { technique: 'median-motor-apb', side: 'asked' }, { technique: 'median-sensory-d2', side: 'asked' },
      { technique: 'ulnar-sensory-d5', side: 'asked' }, { technique: 'ulnar-motor-adm', side: 'asked' },
    ],
  },
  {
    id: 'ulnar-elbow', label: 'Ulnar nerve at the elbow',
    basis: 'Wrist, below and above elbow, with digital sensory and a comparison nerve: AAEM/AAN/AAPMR practice parameter, Campbell et al., Muscle Nerve 1999;22:408-411 (list from memory).',
    runs: [
      { technique: 'ulnar-motor-adm', side: 'asked' }, { technique: 'ulnar-sensory-d5', side: 'asked' },
      { technique: 'median-motor-apb', side: 'asked' }, { technique: 'median-sensory-d2', side: 'asked' },
    ],
  },
  {
    id: 'polyneuropathy', label: 'Polyneuropathy',
    basis: 'Sural and fibular motor first, then ulnar and median sensory, ulnar motor, tibial motor: England et al., Neurology 2005;64:199-207 (abstract read; sequence from a table of national guidelines, read).',
    runs: [
      { technique: 'sural', side: 'both' }, { technique: 'fibular-motor-edb', side: 'both' }, { technique: 'tibial-motor-ah', side: 'both' },
      { technique: 'ulnar-sensory-d5', side: 'asked' }, { technique: 'median-sensory-d2', side: 'asked' }, { technique: 'ulnar-motor-adm', side: 'asked' },
    ],
  },
  {
    id: 'foot-drop', label: 'Foot drop',
    basis: 'Fibular motor with the segment across the fibular head, superficial fibular and sural sensory, tibial motor: common practice.',
    runs: [
      { technique: 'fibular-motor-edb', side: 'asked' }, { technique: 'fibular-motor-ta', side: 'asked' },
      { technique: 'superficial-fibular', side: 'both' }, { technique: 'sural', side: 'both' }, { technique: 'tibial-motor-ah', side: 'asked' },
    ],
  },
]

export interface PlannedRun { technique: string, side: Side }

/** "Both", "midline" and a side that was not given ask for both sides. */
export const sidesAsked = (side: ReferralSide | null): Side[] => side === 'right' || side === 'left' ? [side] : ['right', 'left']

/** The runs that a protocol plans, in its order, RIGHT before LEFT. */
export function plannedRuns(protocol: Protocol | null, side: ReferralSide | null): PlannedRun[] {
  return (protocol?.runs ?? []).flatMap(run => (run.side === 'both' ? ['right', 'left'] as const : sidesAsked(side)).map(where => ({ technique: run.technique, side: where })))
}
