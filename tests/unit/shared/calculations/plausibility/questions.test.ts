import { describe, expect, it } from 'vitest'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { carpalTunnelStudy } from '../../../../fixtures/carpal-tunnel-study'
import { assess, codes, remarkOf, run, studyWith } from '../study-maker'

type Values = RunRow['values']
const median = (wrist: Values, elbow?: Values, changes: Partial<Run> = {}) => run('median-motor-apb', 'right', [['wrist', wrist], ...(elbow ? [['elbow', elbow] as [string, Values]] : [])], changes)
const ulnar = (wrist: Values, below: Values, above?: Values, changes: Partial<Run> = {}) => run('ulnar-motor-adm', 'right', [['wrist', wrist], ['below-elbow', below], ...(above ? [['above-elbow', above] as [string, Values]] : [])], changes)
const sensory = (values: Values, changes: Partial<Run> = {}) => run('median-sensory-d2', 'right', [['wrist', values]], changes)
const good = { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }
const goodUlnar = { latencyMs: 2.9, amplitudeMv: 9.6, distanceMm: 80 }
const goodSensory = { onsetLatencyMs: 2.8, peakLatencyMs: 3.5, amplitudeUv: 20, distanceMm: 140 }
const said = (runs: Run[], changes: Partial<Study> = {}) => codes(assess(studyWith(runs, changes)))

/** name, runs, the remark that must come. Add a row to add a case. */
const asked: [name: string, runs: Run[], code: string][] = [
  ['zero is no measurement', [median({ ...good, amplitudeMv: 0 })], 'stop zero'],
  ['a negative latency', [median({ ...good, latencyMs: -3.5 })], 'stop zero'],
  ['a latency beyond the possible', [median({ ...good, latencyMs: 350 })], 'stop impossible'],
  ['a distance beyond the possible', [median({ ...good, distanceMm: 8 })], 'stop impossible'],
  ['microvolts in a field of millivolts', [median({ ...good, amplitudeMv: 6800 })], 'stop impossible'],
  ['a very small motor amplitude', [median({ ...good, amplitudeMv: 0.05 })], 'check unusual'],
  ['a large sensory amplitude', [sensory({ ...goodSensory, amplitudeUv: 150 })], 'check unusual'],
  ['a long latency', [median({ ...good, latencyMs: 35 })], 'check unusual'],
  ['proximal latency not longer', [median(good, { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 215 })], 'stop latency-order'],
  ['proximal latency shorter', [median(good, { latencyMs: 3.0, amplitudeMv: 8, distanceMm: 215 })], 'stop latency-order'],
  ['peak before onset', [sensory({ ...goodSensory, peakLatencyMs: 2.7 })], 'stop peak-before-onset'],
  ['peak at the onset', [sensory({ ...goodSensory, peakLatencyMs: 2.8 })], 'stop peak-before-onset'],
  ['a latency beside no response', [median({ ...good, amplitudeMv: 'no-response' })], 'stop response-and-none'],
  ['an amplitude beside no response', [sensory({ ...goodSensory, onsetLatencyMs: 'no-response', peakLatencyMs: 'no-response' })], 'stop response-and-none'],
  ['a velocity no nerve has', [median(good, { latencyMs: 4.5, amplitudeMv: 8, distanceMm: 215 })], 'stop velocity-impossible'],
  ['a velocity few nerves have', [median(good, { latencyMs: 6.0, amplitudeMv: 8, distanceMm: 215 })], 'check velocity-unusual'],
  ['a very slow velocity', [median(good, { latencyMs: 20, amplitudeMv: 8, distanceMm: 215 })], 'check velocity-unusual'],
  ['a fast lower leg', [run('tibial-motor-ah', 'right', [['ankle', { latencyMs: 5, amplitudeMv: 9, distanceMm: 80 }], ['popliteal-fossa', { latencyMs: 11.5, amplitudeMv: 8, distanceMm: 400 }]])], 'check velocity-unusual'],
  ['a latency too short for its distance', [median({ ...good, latencyMs: 0.9 })], 'check latency-too-short'],
  ['a forearm of 100 mm', [median(good, { latencyMs: 5.5, amplitudeMv: 8, distanceMm: 100 })], 'check distance-unusual'],
  ['a forearm in centimetres', [median(good, { latencyMs: 7.5, amplitudeMv: 8, distanceMm: 22 })], 'check short-segment'],
  ['a short segment across the elbow', [ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 9.4, distanceMm: 205 }, { latencyMs: 7.4, amplitudeMv: 9.3, distanceMm: 60 })], 'check short-segment'],
  ['a long way across the elbow', [ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 9.4, distanceMm: 205 }, { latencyMs: 9.4, amplitudeMv: 9.3, distanceMm: 150 })], 'check distance-unusual'],
  ['elbow position left out', [ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 9.4, distanceMm: 205 }, { latencyMs: 8.1, amplitudeMv: 9.3, distanceMm: 100 })], 'note elbow-position-missing'],
  ['elbow straight', [ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 9.4, distanceMm: 205 }, { latencyMs: 8.1, amplitudeMv: 9.3, distanceMm: 100 }, { elbowFlexionDegrees: 10 })], 'note elbow-position'],
  ['larger above than below', [median(good, { latencyMs: 7.5, amplitudeMv: 10, distanceMm: 215 })], 'check proximal-larger'],
  ['ulnar forearm fall without slowing', [ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 6.5, distanceMm: 205 })], 'check martin-gruber'],
  ['a fall with a stimulus no stronger', [median({ ...good, stimulusMa: 40 }, { latencyMs: 7.5, amplitudeMv: 4, distanceMm: 215, stimulusMa: 30 })], 'check weak-stimulus'],
  ['larger at the knee than at the ankle', [run('fibular-motor-edb', 'right', [['ankle', { latencyMs: 4.5, amplitudeMv: 3, distanceMm: 80 }], ['below-fibular-head', { latencyMs: 11, amplitudeMv: 4.5, distanceMm: 310 }]])], 'check proximal-larger'],
  ['F before M', [run('median-f-apb', 'right', [['wrist', { minimumLatencyMs: 3, mLatencyMs: 3.5 }]])], 'stop f-before-m'],
  ['F latencies out of order', [run('median-f-apb', 'right', [['wrist', { minimumLatencyMs: 28, meanLatencyMs: 27, maximumLatencyMs: 30 }]])], 'stop f-order'],
  ['more F-waves than stimuli', [run('median-f-apb', 'right', [['wrist', { minimumLatencyMs: 28, stimulusCount: 10, responseCount: 11 }]])], 'stop f-count'],
  ['few F stimuli', [run('median-f-apb', 'right', [['wrist', { minimumLatencyMs: 28, stimulusCount: 8, responseCount: 7 }]])], 'note f-few-stimuli'],
  ['H before M', [run('h-reflex-soleus', 'right', [['popliteal-fossa', { mLatencyMs: 5, hLatencyMs: 4 }]])], 'stop h-before-m'],
  ['an early H', [run('h-reflex-soleus', 'right', [['popliteal-fossa', { mLatencyMs: 5, hLatencyMs: 18 }]])], 'check h-range'],
  ['H larger than M', [run('h-reflex-soleus', 'right', [['popliteal-fossa', { mAmplitudeMv: 5, hAmplitudeMv: 6 }]])], 'check h-above-m'],
  ['R2 before R1', [run('blink', 'right', [['supraorbital', { r1Ms: 11, r2IpsilateralMs: 10 }]])], 'stop r2-before-r1'],
  ['a train that keeps falling', [run('repetitive-ulnar-adm', 'right', [['rest', { rateHz: 3 }, [8.0, 7.7, 7.4, 7.1, 6.8, 6.5]]])], 'check train-keeps-falling'],
  ['a train at 1 Hz', [run('repetitive-ulnar-adm', 'right', [['rest', { rateHz: 1 }, [8.0, 7.7, 7.6, 7.6]]])], 'note train-rate'],
  ['a response of a series beyond the possible', [run('repetitive-ulnar-adm', 'right', [['rest', { rateHz: 3 }, [8.0, 77, 7.6, 7.6]]])], 'stop series-impossible'],
  ['a site that the technique does not have', [run('median-motor-apb', 'right', [['knee', good]])], 'check unknown-site'],
  ['a site twice', [run('median-motor-apb', 'right', [['wrist', good], ['wrist', good]])], 'check site-twice'],
  ['a technique that the catalogue does not have', [run('not-a-technique', 'right', [['wrist', good]])], 'stop unknown-technique'],
  ['recorded twice', [median(good, undefined, { id: 'a' }), median({ ...good, latencyMs: 3.6 }, undefined, { id: 'b' })], 'check recorded-twice'],
  ['the same on both sides', [median(good), { ...median(good, undefined, { id: 'left' }), side: 'left' }].map(one => ({ ...one, rows: one.rows.map(row => ({ ...row, values: { ...row.values, durationMs: 5 } })) })) as Run[], 'check sides-identical'],
  ['an empty latency', [median({ amplitudeMv: 8, distanceMm: 80 })], 'note empty'],
  ['an empty duration beside others', [median({ ...good, durationMs: 5 }, { latencyMs: 7.5, amplitudeMv: 7.8, distanceMm: 215 })], 'note empty'],
  ['half the amplitude of the other side', [median(good), { ...median({ ...good, amplitudeMv: 3.9 }, undefined, { id: 'left' }), side: 'left' }], 'note side-amplitude/side-difference/median-motor-apb'],
  ['a sensory response beside a very long motor latency', [median({ ...good, latencyMs: 8 }), sensory(goodSensory)], 'note sensory-beside-long-latency'],
]

describe('questioned', () => {
  it.each(asked)('%s', (_, runs, code) => expect(said(runs)).toContain(code))
})

/** name, runs, the remark that must not come although it is near. */
const notAsked: [name: string, runs: Run[], part: string][] = [
  ['a latency of 16 ms from behind the knee', [run('tibial-motor-ah', 'right', [['ankle', { latencyMs: 5.2, amplitudeMv: 9, distanceMm: 80 }], ['popliteal-fossa', { latencyMs: 16, amplitudeMv: 8, distanceMm: 430 }]])], 'unusual'],
  ['a declared short segment', [ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 9.4, distanceMm: 205 }, { latencyMs: 7.4, amplitudeMv: 9.3, distanceMm: 60 }, { shortSegments: true })], 'short-segment'],
  ['20 % larger above', [median(good, { latencyMs: 7.5, amplitudeMv: 9.6, distanceMm: 215 })], 'proximal-larger'],
  ['ulnar forearm fall with slowing', [ulnar(goodUlnar, { latencyMs: 9.0, amplitudeMv: 6.5, distanceMm: 205 })], 'martin-gruber'],
  ['median forearm fall', [median(good, { latencyMs: 7.5, amplitudeMv: 5, distanceMm: 215 })], 'martin-gruber'],
  ['a stronger stimulus', [median({ ...good, stimulusMa: 30 }, { latencyMs: 7.5, amplitudeMv: 4, distanceMm: 215, stimulusMa: 40 })], 'weak-stimulus'],
  ['sites added in another order', [run('median-motor-apb', 'right', [['elbow', { latencyMs: 7.5, amplitudeMv: 7.8, distanceMm: 215 }], ['wrist', good]])], 'latency-order'],
  ['exactly half the amplitude', [median(good), { ...median({ ...good, amplitudeMv: 4 }, undefined, { id: 'left' }), side: 'left' }], 'side-amplitude'],
  ['a repeat that says so', [median(good, undefined, { id: 'a' }), median({ ...good, latencyMs: 3.6 }, undefined, { id: 'b', repeats: 'a' })], 'recorded-twice'],
  ['both responses absent', [median({ latencyMs: 'no-response', amplitudeMv: 'no-response', distanceMm: 80 })], 'response-and-none'],
  ['a train of five', [run('repetitive-ulnar-adm', 'right', [['rest', { rateHz: 3 }, [8.0, 7.7, 7.4, 7.1, 6.8]]])], 'train-keeps-falling'],
  ['a fast train at 30 Hz', [run('repetitive-ulnar-adm', 'right', [['high-rate', { rateHz: 30 }, [1, 1.5, 2]]])], 'train-rate'],
  ['a rest train and one after exercise', [run('repetitive-ulnar-adm', 'right', [['after-exercise', { rateHz: 3, secondsAfterExercise: 0 }, [8]], ['after-exercise', { rateHz: 3, secondsAfterExercise: 60 }, [8]]])], 'site-twice'],
]

describe('not questioned', () => {
  it.each(notAsked)('%s', (_, runs, part) => expect(said(runs).filter(code => code.includes(part))).toEqual([]))
})

describe('sentences', () => {
  it.each([
    [median({ ...good, amplitudeMv: 6800 }), 'impossible', 'Amplitude at wrist must be between 0.01 and 50 mV; 6800 was entered. Were microvolts entered? Enter millivolts.'],
    [median({ ...good, latencyMs: 35 }), 'unusual', 'Latency at wrist is usually between 0.5 and 15 ms; 35 was entered. Is the decimal point missing?'],
    [median({ ...good, distanceMm: 8 }), 'impossible', 'Distance at wrist must be between 10 and 300 mm; 8 was entered. Were centimetres entered? Enter millimetres.'],
    [sensory({ ...goodSensory, amplitudeUv: 0.02 }), 'impossible', 'Amplitude at wrist must be between 0.1 and 300 µV; 0.02 was entered. Were millivolts entered? Enter microvolts.'],
    [median({ ...good, amplitudeMv: 0 }), 'zero', 'Amplitude at wrist: 0 is no measurement. Enter no response, technical, not done or stopped.'],
    [median(good, { latencyMs: 3.0, amplitudeMv: 8, distanceMm: 215 }), 'latency-order', 'The latency at elbow (3 ms) must be longer than at wrist (3.5 ms).'],
    [ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 6.5, distanceMm: 205 }), 'martin-gruber', 'The amplitude falls by 32 % from wrist to below elbow without slowing: fibres may cross from the median nerve in the forearm.'],
  ])('%#', (one, code, sentence) => expect(remarkOf(assess(studyWith([one])), code)?.sentence).toBe(sentence))

  it('names the stimulation to add', () => {
    const remark = remarkOf(assess(studyWith([ulnar(goodUlnar, { latencyMs: 6.4, amplitudeMv: 6.5, distanceMm: 205 })])), 'martin-gruber')
    expect(remark?.suggestion).toMatchObject({ sentence: 'Stimulate the median nerve at the elbow, recording the same muscle.', side: 'right' })
  })
})

describe('sides and the referral', () => {
  const left: Run = { ...median(good), side: 'left' }
  it('only the other side is questioned', () => expect(said([left], { referralSide: 'right' })).toContain('check side-unlike-referral'))
  it.each([['both recorded', [left, median(good, undefined, { id: 'r' })], 'right'], ['the side asked for', [left], 'left'], ['both asked for', [left], 'both'], ['nothing recorded', [], 'right']] as const)('%s is not', (_, runs, referralSide) => {
    expect(said([...runs], { referralSide })).not.toContain('check side-unlike-referral')
  })
})

it('the sural alone among absent responses is questioned', () => {
  const silent = (technique: string, site: string) => run(technique, 'right', [[site, { amplitudeMv: 'no-response', latencyMs: 'no-response' }]])
  const silentSensory = run('superficial-fibular', 'right', [['leg', { onsetLatencyMs: 'no-response', amplitudeUv: 'no-response' }]])
  const sural = run('sural', 'right', [['calf', goodSensory]])
  expect(said([sural, silent('fibular-motor-edb', 'ankle'), silent('tibial-motor-ah', 'ankle'), silentSensory])).toContain('check sural-alone')
  expect(said([sural, silent('fibular-motor-edb', 'ankle'), silent('tibial-motor-ah', 'ankle')])).not.toContain('check sural-alone')
  expect(said([sural, silent('fibular-motor-edb', 'ankle'), run('tibial-motor-ah', 'right', [['ankle', good]]), silentSensory])).not.toContain('check sural-alone')
})

describe('a kept check', () => {
  const study = studyWith([median(good, { latencyMs: 7.5, amplitudeMv: 10, distanceMm: 215 })])
  const key = remarkOf(assess(study), 'proximal-larger')?.key as string
  it('keeps its reason', () => expect(remarkOf(assess({ ...study, keptChecks: [{ key, reason: 'repeated, the same' }] }), 'proximal-larger')?.kept).toBe('repeated, the same'))
  it('is not there for what cannot be right', () => {
    const wrong = studyWith([median({ ...good, amplitudeMv: 0 })])
    const stop = remarkOf(assess(wrong), 'zero')?.key as string
    expect(remarkOf(assess({ ...wrong, keptChecks: [{ key: stop, reason: 'because' }] }), 'zero')?.kept).toBeUndefined()
  })
})

it('a run that was not done is not questioned', () => expect(said([{ ...median({ ...good, distanceMm: 80 }), rows: [], notDoneBecause: 'plaster cast' }]).filter(code => !code.includes('temperature'))).toEqual([]))
it('the study of both hands raises one note', () => expect(codes(assess(carpalTunnelStudy()))).toEqual(['note elbow-position-missing']))
