import { describe, expect, it } from 'vitest'
import { asked, right, type Row } from './asking'

const codes = ['distance-unusual', 'short-segment', 'latency-too-short', 'velocity-impossible', 'velocity-unusual', 'elbow-position', 'elbow-position-missing']
const median = (...rows: Row[]) => right('median-motor-apb', rows)
const forearm = (distanceMm: number) => median(['wrist', { latencyMs: 3.5 }], ['elbow', { distanceMm }])
/** Velocity of the forearm: way over the time between the two latencies. */
const speed = (distanceMm: number, from: number, to: number) => median(['wrist', { latencyMs: from }], ['elbow', { latencyMs: to, distanceMm }])
const leg = (distanceMm: number, time: number) => right('tibial-motor-ah', [['ankle', { latencyMs: 5 }], ['popliteal-fossa', { latencyMs: 5 + time, distanceMm }]])
const acrossElbow = (distanceMm: number, changes: Parameters<typeof right>[2] = {}) =>
  right('ulnar-motor-adm', [['below-elbow', { latencyMs: 6 }], ['above-elbow', { latencyMs: 6.3, distanceMm }]], { elbowFlexionDegrees: 80, ...changes })

const unusual = (entered: number, hint = '') => [`check distance-unusual/r/r-1/distanceMm: Distance at elbow is usually between 150 and 320 mm in adults; ${entered} was entered.${hint}`]
const short = (entered: number, hint = '', site = 'elbow') => [`check short-segment/r/r-1/distanceMm: The segment to ${site} is ${entered} mm, under 80 mm: a small slip of the tape changes the velocity much. Declare a short-segment study or measure again.${hint}`]
const centimetres = ' Were centimetres entered? Enter millimetres.'

/** Usual adult distances and the 80 mm: number 10 of the decisions on numbers. */
describe('distances', () => {
  it.each([
    ['the shortest usual forearm', forearm(150), []],
    ['a shorter one', forearm(149), unusual(149)],
    ['the longest usual forearm', forearm(320), []],
    ['a longer one', forearm(321), unusual(321)],
    ['80 mm is no short segment', forearm(80), unusual(80)],
    ['79 mm is', forearm(79), short(79)],
    ['15 cm', forearm(15), short(15, centimetres)],
    ['32 cm', forearm(32), short(32, centimetres)],
    ['33 cm would be too long', forearm(33), short(33)],
    ['14 cm too short', forearm(14), short(14)],
    ['the shortest there can be', forearm(10), short(10)],
    ['what cannot be at all is asked elsewhere', forearm(9), []],
    ['the longest there can be', forearm(500), unusual(500)],
    ['beyond it is asked elsewhere', forearm(501), []],
    ['0 is asked elsewhere', forearm(0), []],
    ['an absence is none', median(['wrist', {}], ['elbow', { distanceMm: 'not-done' }]), []],
    ['the most distal is no segment', median(['wrist', { distanceMm: 39 }]), ['check distance-unusual/r/r-0/distanceMm: Distance at wrist is usually between 40 and 130 mm in adults; 39 was entered.']],
    ['13 cm to the muscle', median(['wrist', { distanceMm: 13 }]), [`check distance-unusual/r/r-0/distanceMm: Distance at wrist is usually between 40 and 130 mm in adults; 13 was entered.${centimetres}`]],
    ['nor are sensory distances', right('median-sensory-d2', [['palm', { distanceMm: 70 }], ['wrist', { distanceMm: 59 }]]), ['check distance-unusual/r/r-1/distanceMm: Distance at wrist is usually between 60 and 180 mm in adults; 59 was entered.']],
    ['a site that is not known', median(['wrist', {}], ['knee', { distanceMm: 30 }]), []],
    ['a site without a segment', right('median-f-apb', [['wrist', { distanceMm: 20 }]]), []],
    ['declared short', right('median-motor-apb', [['wrist', {}], ['elbow', { distanceMm: 60 }]], { shortSegments: true }), []],
    ['declared not short', right('median-motor-apb', [['wrist', {}], ['elbow', { distanceMm: 60 }]], { shortSegments: false }), short(60)],
    ['short by its technique', right('ulnar-motor-adm-short', [['elbow-minus-4', {}], ['elbow-minus-2', { distanceMm: 30 }]]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

describe('a distal latency too short for its way', () => {
  const line = ['check latency-too-short/r/r-0/latencyMs: 0.99 ms at wrist is shorter than the nerve alone would take over 80 mm: check the cursor, the distance and stimulus spread.']
  it.each([
    ['80 m/s', median(['wrist', { latencyMs: 1, distanceMm: 80 }]), []],
    ['faster', median(['wrist', { latencyMs: 0.99, distanceMm: 80 }]), line],
    ['no distance', median(['wrist', { latencyMs: 0.99 }]), []],
    ['no latency', median(['wrist', { distanceMm: 80 }]), []],
    ['0 is asked elsewhere', median(['wrist', { latencyMs: 0, distanceMm: 80 }]), []],
    ['a sensory latency has no time in a muscle', right('median-sensory-d2', [['wrist', { latencyMs: 0.99, distanceMm: 80 }]]), []],
    ['only the most distal', median(['wrist', { latencyMs: 0.5 }], ['elbow', { latencyMs: 1.5, distanceMm: 150 }]), ['stop velocity-impossible/r/r-1/velocityMps: Velocity, elbow to wrist comes to 150 m/s; nerves carry between 1 and 100 m/s. Check the distance and both latencies.']],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

/** Nerves carry 1 to 100 m/s: number 10 of the decisions on numbers; 15 to 80, and 55 in the lower leg: table of soft ranges. */
describe('velocities', () => {
  const comesTo = (much: string, max = 80, what = 'Velocity, elbow to wrist') => [`check velocity-unusual/r/r-1/velocityMps: ${what} comes to ${much} m/s, usually between 15 and ${max} m/s. Check the distance, the cursors, cathode and anode.`]
  const cannot = (much: string) => [`stop velocity-impossible/r/r-1/velocityMps: Velocity, elbow to wrist comes to ${much} m/s; nerves carry between 1 and 100 m/s. Check the distance and both latencies.`]
  const tibial = 'Velocity, popliteal fossa to ankle'
  it.each([
    ['100 m/s', speed(200, 3, 5), comesTo('100')],
    ['faster', speed(202, 3, 5), cannot('101')],
    ['80 m/s', speed(160, 3, 5), []],
    ['faster than usual', speed(162, 3, 5), comesTo('81')],
    ['15 m/s', speed(150, 3, 13), []],
    ['slower than usual', speed(150, 3, 13.5), comesTo('14')],
    ['under 10 with a decimal', speed(150, 3, 23), comesTo('7.5')],
    ['10 without', speed(150, 3, 18), comesTo('10')],
    ['1 m/s', speed(90, 3, 93), [...unusual(90), ...comesTo('1.0')]],
    ['slower', speed(90, 3, 94), [...unusual(90), ...cannot('1.0')]],
    ['not computable', median(['wrist', { latencyMs: 3 }], ['elbow', { latencyMs: 5 }]), []],
    ['55 m/s in the lower leg', leg(440, 8), []],
    ['faster in the lower leg', leg(448, 8), comesTo('56', 55, tibial)],
    ['slow in the lower leg', leg(420, 30), comesTo('14', 55, tibial)],
    ['across the fibular head as elsewhere', right('fibular-motor-edb', [['below-fibular-head', { latencyMs: 11 }], ['above-fibular-head', { latencyMs: 12, distanceMm: 70 }]]), ['check short-segment/r/r-1/distanceMm: The segment to above fibular head (popliteal) is 70 mm, under 80 mm: a small slip of the tape changes the velocity much. Declare a short-segment study or measure again.']],
    ['the sural nerve as elsewhere', right('sural', [['calf', { onsetLatencyMs: 2, distanceMm: 140 }]]), []],
    ['sensory segments too', right('median-sensory-d2', [['palm', { onsetLatencyMs: 1.4, distanceMm: 70 }], ['wrist', { onsetLatencyMs: 2, distanceMm: 140 }]]), ['stop velocity-impossible/r/r-1/segmentVelocityMps: Velocity, wrist to palm comes to 117 m/s; nerves carry between 1 and 100 m/s. Check the distance and both latencies.']],
    ['a declared step moves with a tenth of a millisecond', right('ulnar-motor-adm-short', [['elbow-minus-4', { latencyMs: 6 }], ['elbow-minus-2', { latencyMs: 6.1, distanceMm: 20 }]]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))

  const fast = (mm: number) => `stop velocity-impossible/r/r-1/velocityMps: Velocity across the elbow comes to ${mm === 80 ? 267 : 263} m/s; nerves carry between 1 and 100 m/s. Check the distance and both latencies.`
  it.each([
    ['a step of 79 mm that was declared', acrossElbow(79, { shortSegments: true }), []],
    ['80 mm is no step', acrossElbow(80, { shortSegments: true }), [fast(80)]],
    ['79 mm not declared', acrossElbow(79), [...short(79, '', 'above elbow'), fast(79)]],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

/** 70 to 90°: practice parameter of 1999, from memory. */
describe('the position of the elbow', () => {
  const elbow = (elbowFlexionDegrees?: number, latencyMs: number | 'technical' = 8) => right('ulnar-motor-adm', [['below-elbow', { latencyMs: 6 }], ['above-elbow', { latencyMs, distanceMm: 100 }]], { elbowFlexionDegrees })
  const bent = (degrees: number) => [`note elbow-position/r/r-1: Elbow bent by ${degrees}°; limits are usually for 70 to 90°.`]
  it.each([
    ['69°', elbow(69), bent(69)],
    ['70°', elbow(70), []],
    ['90°', elbow(90), []],
    ['91°', elbow(91), bent(91)],
    ['straight', elbow(0), bent(0)],
    ['not recorded', elbow(), ['note elbow-position-missing/r/r-1: Elbow position not recorded; bent by 70 to 90° is usual.']],
    ['nothing measured there', elbow(undefined, 'technical'), []],
    ['only in the forearm', right('ulnar-motor-adm', [['wrist', { latencyMs: 3 }], ['below-elbow', { latencyMs: 6 }]]), []],
    ['a sensory study', right('ulnar-sensory-d5', [['above-elbow', { latencyMs: 8, onsetLatencyMs: 8 }]]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})
