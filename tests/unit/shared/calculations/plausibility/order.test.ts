import { describe, expect, it } from 'vitest'
import { asked, right, type Row } from './asking'

const codes = ['unknown-site', 'site-twice', 'latency-order', 'peak-before-onset', 'f-before-m', 'f-order', 'f-count', 'f-few-stimuli', 'h-before-m', 'h-range', 'h-above-m', 'r2-before-r1']
const median = (...rows: Row[]) => right('median-motor-apb', rows)
const digit = (...rows: Row[]) => right('median-sensory-d2', rows)
const wave = (values: Row[1], series?: Row[2]) => right('median-f-apb', [['wrist', { stimulusCount: 20, ...values }, series]])
const soleus = (values: Row[1], technique = 'h-reflex-soleus') => right(technique, [[technique === 'h-reflex-soleus' ? 'popliteal-fossa' : 'elbow', values]])
const blink = (values: Row[1]) => right('blink', [['supraorbital', values]])

describe('sites', () => {
  it.each([
    ['one that the technique does not have', median(['knee', { latencyMs: 3 }]), ['check unknown-site/r/r-0: The site knee does not belong to median motor.']],
    ['a needle goes anywhere', right('needle-apb', [['elsewhere', {}], ['elsewhere', {}]]), []],
    ['one twice', median(['wrist', { latencyMs: 3 }], ['wrist', { latencyMs: 4 }]), ['check site-twice/r/r-1: Wrist stands twice in median motor.']],
    ['one three times', median(['wrist', {}], ['wrist', {}], ['wrist', { latencyMs: 4 }]), ['check site-twice/r/r-1: Wrist stands twice in median motor.', 'check site-twice/r/r-2: Wrist stands twice in median motor.']],
    ['trains are repeated', right('repetitive-ulnar-adm', [['rest', {}, [8, 7]], ['rest', {}, [8, 7]]]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

describe('latencies rise along the nerve', () => {
  it.each([
    ['equal', median(['wrist', { latencyMs: 3.5 }], ['elbow', { latencyMs: 3.5 }]), ['stop latency-order/r/r-1/latencyMs: The latency at elbow (3.5 ms) must be longer than at wrist (3.5 ms).']],
    ['a hundredth longer', median(['wrist', { latencyMs: 3.5 }], ['elbow', { latencyMs: 3.51 }]), []],
    ['a blank between is passed over', median(['wrist', { latencyMs: 3.5 }], ['elbow', {}], ['axilla', { latencyMs: 3.4 }]), ['stop latency-order/r/r-2/latencyMs: The latency at axilla (3.4 ms) must be longer than at wrist (3.5 ms).']],
    ['each against the one before', median(['wrist', { latencyMs: 3.5 }], ['elbow', { latencyMs: 8 }], ['axilla', { latencyMs: 7.9 }]), ['stop latency-order/r/r-2/latencyMs: The latency at axilla (7.9 ms) must be longer than at elbow (8 ms).']],
    ['an absent one is passed over', median(['wrist', { latencyMs: 'no-response' }], ['elbow', { latencyMs: 3 }]), []],
    ['sensory onsets', digit(['palm', { onsetLatencyMs: 2 }], ['wrist', { onsetLatencyMs: 1.9 }]), ['stop latency-order/r/r-1/onsetLatencyMs: The latency at wrist (1.9 ms) must be longer than at palm (2 ms).']],
    ['mixed onsets', right('median-mixed-palm', [['palm', { onsetLatencyMs: 2 }], ['palm', { onsetLatencyMs: 2 }]]), ['check site-twice/r/r-1: Palm stands twice in median mixed, palm to wrist.', 'stop latency-order/r/r-1/onsetLatencyMs: The latency at palm (2 ms) must be longer than at palm (2 ms).']],
    ['motor latencies, not onsets', median(['wrist', { onsetLatencyMs: 4 }], ['elbow', { onsetLatencyMs: 3 }]), []],
    ['not in other studies', right('repetitive-ulnar-adm', [['rest', { latencyMs: 4, onsetLatencyMs: 4 }], ['after-exercise', { latencyMs: 3, onsetLatencyMs: 3 }]]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

describe('the peak comes after the onset', () => {
  it.each([
    ['at the onset', digit(['wrist', { onsetLatencyMs: 2.8, peakLatencyMs: 2.8 }]), ['stop peak-before-onset/r/r-0/peakLatencyMs: The peak (2.8 ms) must come after the onset (2.8 ms).']],
    ['a hundredth later', digit(['wrist', { onsetLatencyMs: 2.8, peakLatencyMs: 2.81 }]), []],
    ['onset blank', digit(['wrist', { peakLatencyMs: 2.8 }]), []],
    ['peak absent', digit(['wrist', { onsetLatencyMs: 2.8, peakLatencyMs: 'technical' }]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

/** At least 10 stimuli: formula collection F3.3; shortest F longer than M: table of hard ranges. */
describe('F-waves', () => {
  const order = ['stop f-order/r/r-0: The F latencies must stand in the order shortest, mean, longest.']
  it.each([
    ['as early as M', wave({ minimumLatencyMs: 3.5, mLatencyMs: 3.5 }), ['stop f-before-m/r/r-0/minimumLatencyMs: The shortest F latency (3.5 ms) must be longer than the M latency (3.5 ms).']],
    ['just after M', wave({ minimumLatencyMs: 3.6, mLatencyMs: 3.5 }), []],
    ['without M', wave({ minimumLatencyMs: 3.5 }), []],
    ['no F', wave({ minimumLatencyMs: 'no-response', mLatencyMs: 3.5 }), []],
    ['all the same', wave({ minimumLatencyMs: 28, meanLatencyMs: 28, maximumLatencyMs: 28 }), []],
    ['mean under shortest', wave({ minimumLatencyMs: 28, meanLatencyMs: 27.9 }), order],
    ['longest under mean', wave({ minimumLatencyMs: 28, meanLatencyMs: 30, maximumLatencyMs: 29 }), order],
    ['longest under shortest, no mean', wave({ minimumLatencyMs: 28, maximumLatencyMs: 27 }), order],
    ['as many responses as stimuli', wave({ stimulusCount: 10, responseCount: 10 }), []],
    ['more', wave({ stimulusCount: 10, responseCount: 11 }), ['stop f-count/r/r-0/responseCount: There cannot be more responses (11) than stimuli (10).']],
    ['nine stimuli', wave({ stimulusCount: 9 }), ['note f-few-stimuli/r/r-0/stimulusCount: 9 stimuli: at least 10 are usual, and chronodispersion needs 10 responses.']],
    ['nobody said how many', right('median-f-apb', [['wrist', { minimumLatencyMs: 28 }]]), []],
    ['nine in a series', right('median-f-apb', [['wrist', {}, Array.from({ length: 9 }, () => 28)]]), ['note f-few-stimuli/r/r-0/stimulusCount: 9 stimuli: at least 10 are usual, and chronodispersion needs 10 responses.']],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

/** Soleus 20 to 45 ms: table of soft ranges. */
describe('H-reflexes', () => {
  it.each([
    ['as early as M', soleus({ hLatencyMs: 25, mLatencyMs: 25 }), ['stop h-before-m/r/r-0/hLatencyMs: The H latency (25 ms) must be longer than the M latency (25 ms).']],
    ['just after M', soleus({ hLatencyMs: 25.1, mLatencyMs: 25 }), []],
    ['without M', soleus({ hLatencyMs: 25 }), []],
    ['without H', soleus({ mLatencyMs: 25 }), []],
    ['20 ms', soleus({ hLatencyMs: 20 }), []],
    ['earlier', soleus({ hLatencyMs: 19.9 }), ['check h-range/r/r-0/hLatencyMs: The H latency of the soleus is usually between 20 and 45 ms; 19.9 was entered.']],
    ['45 ms', soleus({ hLatencyMs: 45 }), []],
    ['later', soleus({ hLatencyMs: 45.1 }), ['check h-range/r/r-0/hLatencyMs: The H latency of the soleus is usually between 20 and 45 ms; 45.1 was entered.']],
    ['a shorter way in the arm', soleus({ hLatencyMs: 17 }, 'h-reflex-fcr'), []],
    ['as large as M', soleus({ hAmplitudeMv: 5, mAmplitudeMv: 5 }), []],
    ['larger', soleus({ hAmplitudeMv: 5.1, mAmplitudeMv: 5 }), ['check h-above-m/r/r-0/hAmplitudeMv: The H amplitude (5.1 mV) is larger than the largest M amplitude (5 mV): was the M response supramaximal?']],
    ['M not measured', soleus({ hAmplitudeMv: 5.1 }), []],
    ['H not measured', soleus({ mAmplitudeMv: 5.1 }), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

describe('the blink reflex', () => {
  it.each([
    ['R2 at R1', blink({ r1Ms: 11, r2IpsilateralMs: 11 }), ['stop r2-before-r1/r/r-0/r2IpsilateralMs: R2 (11 ms) must come after R1 (11 ms).']],
    ['on the other side', blink({ r1Ms: 11, r2ContralateralMs: 10 }), ['stop r2-before-r1/r/r-0/r2ContralateralMs: R2 (10 ms) must come after R1 (11 ms).']],
    ['after it', blink({ r1Ms: 11, r2IpsilateralMs: 11.1, r2ContralateralMs: 30 }), []],
    ['without R1', blink({ r2IpsilateralMs: 10 }), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

it('numbers of another kind of study are not put in order', () => {
  const stray = { stimulusCount: 3, minimumLatencyMs: 2, mLatencyMs: 3, hLatencyMs: 1, r1Ms: 11, r2IpsilateralMs: 10 }
  expect(asked(codes, [median(['wrist', stray])])).toEqual([])
})
