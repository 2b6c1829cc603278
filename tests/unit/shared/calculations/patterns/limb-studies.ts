import type { Run, RunRow, Study } from '#shared/schemas/study'
import { run } from '../study-maker'
import { motorNerve, sensory, type Limit } from './pattern-maker'

/** Studies of one limb for whole check lists; limits of nobody's laboratory. */
export const limits: readonly Limit[] = [
  ['median-motor-apb', 'latencyMs', 'wrist', 'upper', 4.5], ['median-motor-apb', 'amplitudeMv', 'wrist', 'lower', 4],
  ['median-sensory-d2', 'velocityMps', 'wrist', 'lower', 40], ['median-sensory-d3', 'velocityMps', 'wrist', 'lower', 40], ['median-mixed-palm', 'velocityMps', 'palm', 'lower', 38], ['median-mixed-palm', 'peakLatencyMs', 'palm', 'upper', 2.3],
  ['median-ulnar-ring', 'peakDifferenceMs', null, 'upper', 0.4], ['median-ulnar-sensory', 'onsetDifferenceMs', null, 'upper', 0.5], ['median-ulnar-sensory', 'peakDifferenceMs', null, 'upper', 0.5],
  ['ulnar-motor-adm', 'velocityMps', 'across-elbow', 'lower', 50], ['ulnar-motor-adm', 'latencyMs', 'wrist', 'upper', 3.7],
  ['fibular-motor-edb', 'velocityMps', 'across-fibular-head', 'lower', 40], ['fibular-motor-edb', 'amplitudeMv', 'ankle', 'lower', 2], ['superficial-fibular', 'amplitudeUv', 'lower-leg', 'lower', 5], ['sural', 'amplitudeUv', 'calf', 'lower', 4],
  ['blink', 'r1Ms', null, 'upper', 13], ['blink', 'r2IpsilateralMs', null, 'upper', 41], ['blink', 'r2ContralateralMs', null, 'upper', 44],
]

type Rows = [site: string, values: RunRow['values'], series?: RunRow['series']][]
const right = (technique: string, rows: Rows, changes: Partial<Run> = {}) => run(technique, 'right', rows, changes)
const ulnar = (technique: string, below: number, above: number, amplitudes: [number, number], changes: Partial<Run> = {}) => right(technique, [
  ['wrist', { latencyMs: 3, amplitudeMv: 10, distanceMm: 80 }], ['below-elbow', { latencyMs: below, amplitudeMv: amplitudes[0], distanceMm: 220 }], ['above-elbow', { latencyMs: above, amplitudeMv: amplitudes[1], distanceMm: 100 }],
], changes)
const fibular = (head: number, amplitudes: [number, number, number]) => right('fibular-motor-edb', [
  ['ankle', { latencyMs: 5, amplitudeMv: amplitudes[0], distanceMm: 80 }], ['below-fibular-head', { latencyMs: 12, amplitudeMv: amplitudes[1], distanceMm: 350 }], ['above-fibular-head', { latencyMs: head, amplitudeMv: amplitudes[2], distanceMm: 100 }],
])
const index = (palm: number, ring: number, thumb: number) => [
  sensory('median-mixed-palm', 'right', { onset: 1.6, peak: 2 + palm }, 80), sensory('ulnar-mixed-palm', 'right', { peak: 2 }, 80), sensory('median-sensory-d4', 'right', { peak: 3.2 + ring }), sensory('ulnar-sensory-d4', 'right', { peak: 3.2 }),
  sensory('median-sensory-d1', 'right', { peak: 2.5 + thumb }, 100), sensory('radial-sensory-d1', 'right', { peak: 2.5 }, 100),
]
const blink = (side: 'right' | 'left', r1Ms: number, r2IpsilateralMs: number | 'no-response', r2ContralateralMs: number) => run('blink', side, [['supraorbital', { r1Ms, r2IpsilateralMs, r2ContralateralMs }]])
const none: Partial<Study> = { temperatures: [] }

export const studies = {
  'a hand, slow': { runs: [...motorNerve('median', 'right', { dml: 5.4, amp: 7 }), sensory('median-sensory-d2', 'right', { onset: 4, peak: 4.8, amplitude: 12 }), sensory('ulnar-sensory-d5', 'right', { onset: 2.8, peak: 3.5, amplitude: 14 }), sensory('median-sensory-d3', 'right', { onset: 3, amplitude: 9 })], study: {} },
  'a hand, only compared': { runs: [...motorNerve('median', 'right', { dml: 4, amp: 7 }), sensory('median-sensory-d2', 'right', { onset: 3, peak: 3.8, amplitude: 12 }), ...index(0.2, 0.6, 0.3)], study: {} },
  'a hand, silent': { runs: [...motorNerve('median', 'right', { dml: 'no-response', amp: 'no-response' }), sensory('median-sensory-d2', 'right', { onset: 'no-response', amplitude: 'no-response' }), sensory('median-sensory-d3', 'right', { amplitude: 'technical' })], study: {} },
  'a hand, cold': { runs: [...motorNerve('median', 'right', { dml: 5.4, amp: 7 }), sensory('median-sensory-d2', 'right', { onset: 4, amplitude: 12 }), ...index(0.2, 0.6, 0.3)], study: none },
  'a hand, motor alone': { runs: motorNerve('median', 'right', { dml: 7.8, amp: 0.1 }), study: {} },
  'index above its limit': { runs: index(0.4, 0.5, 0.8), study: {} },
  'index of two parts, one over another way': { runs: [...index(0.1, 0.2, 0.9).slice(0, 4), sensory('median-sensory-d1', 'right', { peak: 3 }, 110), sensory('radial-sensory-d1', 'right', { peak: 2.5 }, 110)], study: {} },
  'elbow, slow': { runs: [ulnar('ulnar-motor-adm', 7, 9.5, [9, 7], { elbowFlexionDegrees: 80 }), ...motorNerve('median', 'right', { dml: 4, amp: 7 })], study: {} },
  'elbow, two muscles': { runs: [ulnar('ulnar-motor-adm', 7, 8.9, [9, 8.8]), ulnar('ulnar-motor-fdi', 7.2, 9.6, [9, 7.1]), ...motorNerve('median', 'right', { dml: 5, amp: 7 })], study: {} },
  'elbow, cold': { runs: [ulnar('ulnar-motor-adm', 7, 9.5, [9, 7])], study: none },
  'knee, slow': { runs: [fibular(15, [4, 3.9, 2]), sensory('superficial-fibular', 'right', { amplitude: 3 }), sensory('sural', 'right', { amplitude: 10 })], study: {} },
  'knee, normal': { runs: [fibular(14, [4, 3.9, 3.8]), sensory('sural', 'right', { amplitude: 'no-response', onset: 'no-response' })], study: {} },
  'knee, cold': { runs: [fibular(14, [4, 3.9, 3.8])], study: none },
  'leg and arm': { runs: [sensory('sural', 'right', { amplitude: 3 }), sensory('radial-sensory-snuffbox', 'right', { amplitude: 20 }, 100)], study: {} },
  'leg and arm, cold': { runs: [sensory('sural', 'right', { amplitude: 3 }), sensory('radial-sensory-snuffbox', 'right', { amplitude: 20 }, 100)], study: none },
  'leg and arm, age not known': { runs: [sensory('sural', 'right', { amplitude: 3 }), sensory('radial-sensory-snuffbox', 'right', { amplitude: 'no-response', onset: 'no-response' }, 100)], study: { patient: { birthDate: '2027-01-01', sexForLimits: null } } },
  'trains': { runs: [right('repetitive-ulnar-adm', [['rest', { rateHz: 3 }, [8, 6.9, 6.4, 6.2, 6.3]], ['after-exercise', { rateHz: 3, secondsAfterExercise: 20 }, [8.2, 7.9, 7.7, 7.6, 7.6]], ['after-exercise', { rateHz: 3, secondsAfterExercise: 120 }, [8, 6.6, 5.9, 5.6, 5.7]], ['high-rate', { rateHz: 30 }, [2, 3, 5]]], { id: 't' })], study: {} },
  'trains, cold': { runs: [right('repetitive-ulnar-adm', [['rest', { rateHz: 3 }, [8, 6.9, 6.4, 6.2, 6.3]], ['after-exercise', { secondsAfterExercise: 20 }, [16]]], { id: 't' })], study: none },
  'trains of one and three': { runs: [right('repetitive-ulnar-adm', [['rest', { rateHz: 1 }, [2, 1.9, 1.8, 1.8]], ['after-exercise', {}, [3.4, 3, 2.9]]], { id: 't' }), right('ulnar-motor-adm', [['wrist', { latencyMs: 3, amplitudeMv: 2 }]])], study: {} },
  'split hand': { runs: [right('median-motor-apb', [['wrist', { amplitudeMv: 4 }]]), right('ulnar-motor-fdi', [['wrist', { amplitudeMv: 8 }]]), right('ulnar-motor-adm', [['wrist', { amplitudeMv: 6.3 }]])], study: {} },
  'split hand, cold': { runs: [right('median-motor-apb', [['wrist', { amplitudeMv: 4 }]]), right('ulnar-motor-fdi', [['wrist', { amplitudeMv: 8 }]]), right('ulnar-motor-adm', [['wrist', { amplitudeMv: 6.3 }]])], study: none },
  'eyes, trigeminal': { runs: [blink('right', 14, 'no-response', 45), blink('left', 11, 33, 34)], study: {} },
  'eyes, facial': { runs: [blink('right', 14, 42, 34), blink('left', 11, 33, 46)], study: {} },
  'eyes, one R1 left out': { runs: [blink('right', 14, 42, 45), run('blink', 'left', [['supraorbital', { r2IpsilateralMs: 33 }]])], study: {} },
} as const satisfies Record<string, { runs: readonly Run[], study: Partial<Study> }>
