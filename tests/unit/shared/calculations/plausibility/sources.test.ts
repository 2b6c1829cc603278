import { describe, expect, it } from 'vitest'
import type { Run } from '#shared/schemas/study'
import { assess, studyWith } from '../study-maker'
import { left, right } from './asking'

/** A study in which every question is asked at least once; nobody has these numbers. */
const runs: Run[] = [
  right('median-motor-apb', [['wrist', { latencyMs: 8, amplitudeMv: 8, distanceMm: 13, stimulusMa: 40 }], ['elbow', { latencyMs: 9, amplitudeMv: 10, distanceMm: 150, stimulusMa: 40 }], ['axilla', { latencyMs: 30, amplitudeMv: 4, distanceMm: 150, stimulusMa: 30 }], ['knee', {}]], { id: 'a', temperatureId: 'gone' }),
  left('median-motor-apb', [['wrist', { latencyMs: 0.9, amplitudeMv: 1, distanceMm: 80 }], ['elbow', { latencyMs: 5, distanceMm: 70 }]], { id: 'b' }),
  right('median-sensory-d2', [['wrist', { onsetLatencyMs: 3, peakLatencyMs: 2, amplitudeUv: 5 }]], { id: 'c' }),
  right('median-sensory-d3', [['palm', { onsetLatencyMs: 3, amplitudeUv: 'no-response' }], ['wrist', { onsetLatencyMs: 2, amplitudeUv: 400 }], ['wrist', { onsetLatencyMs: 0 }]], { id: 'd' }),
  right('ulnar-motor-adm', [['wrist', { latencyMs: 3, amplitudeMv: 10 }], ['below-elbow', { latencyMs: 6, amplitudeMv: 7, distanceMm: 205 }], ['above-elbow', { latencyMs: 8, amplitudeMv: 7, distanceMm: 100 }]], { id: 'e' }),
  left('ulnar-motor-adm', [['below-elbow', { latencyMs: 6 }], ['above-elbow', { latencyMs: 36, distanceMm: 350 }]], { id: 'f', elbowFlexionDegrees: 10 }),
  right('median-f-apb', [['wrist', { minimumLatencyMs: 3, meanLatencyMs: 2, mLatencyMs: 4, stimulusCount: 5, responseCount: 6 }, [400]]], { id: 'g' }),
  right('h-reflex-soleus', [['popliteal-fossa', { hLatencyMs: 10, mLatencyMs: 11, hAmplitudeMv: 4, mAmplitudeMv: 3 }]], { id: 'h' }),
  right('blink', [['supraorbital', { r1Ms: 11, r2IpsilateralMs: 10 }]], { id: 'i' }),
  right('repetitive-ulnar-adm', [['rest', { rateHz: 1 }, [8, 7.7, 7.4, 7.1, 6.8, 6.5]]], { id: 'j' }),
  right('tibial-motor-ah', [['ankle', { latencyMs: 5, amplitudeMv: 9, durationMs: 5 }]], { id: 'k' }),
  left('tibial-motor-ah', [['ankle', { latencyMs: 5, amplitudeMv: 9, durationMs: 5 }]], { id: 'l' }),
  left('tibial-motor-ah', [['ankle', { latencyMs: 5, amplitudeMv: 9, durationMs: 5 }]], { id: 'm' }),
  right('unheard-of', [['wrist', { latencyMs: 3 }]], { id: 'n' }),
]
const temperatures = [
  { id: 'cold', segment: 'hand' as const, side: 'right' as const, celsius: 28, warmed: false, at: '2026-12-02T09:00:00Z' },
  { id: 'short', segment: 'hand' as const, side: 'right' as const, celsius: 30, warmed: true, at: '2026-12-02T09:10:00Z' },
  { id: 'hot', segment: 'hand' as const, side: 'left' as const, celsius: 39, warmed: false },
]
const wrongSide = studyWith([left('sural', [['calf', { amplitudeUv: 10 }]], { id: 'sural' }), ...['fibular-motor-edb', 'tibial-motor-ah', 'median-motor-apb'].map((technique, index) => left(technique, [['wrist', { amplitudeMv: 'no-response' }]], { id: `s${index}` }))], { referralSide: 'right' })
const remarks = () => [studyWith(runs, { temperatures }), wrongSide].flatMap(study => assess(study).remarks)

const practice = 'common practice'
const ranges = 'this project\'s ranges: common practice, wide enough for severe disease'
const crossing = 'Martin-Gruber in 19.5 % of forearms (published); the 20 % from memory'
const elbow = 'AAEM/AAN/AAPMR practice parameter, Campbell et al., Muscle Nerve 1999;22:408-411: 70 to 90°, from memory'
const sources: Record<string, string> = {
  'zero': ranges, 'impossible': ranges, 'unusual': ranges, 'series-impossible': ranges, 'distance-unusual': ranges, 'latency-too-short': ranges, 'velocity-impossible': ranges, 'velocity-unusual': ranges,
  'response-and-none': practice, 'unknown-site': practice, 'site-twice': practice, 'latency-order': practice, 'peak-before-onset': practice, 'f-before-m': practice, 'f-order': practice, 'f-count': practice,
  'h-before-m': practice, 'h-range': practice, 'h-above-m': practice, 'r2-before-r1': practice, 'weak-stimulus': practice, 'empty': practice, 'temperature-elsewhere': practice, 'temperature-missing': practice,
  'temperature-high': practice, 'recorded-twice': practice, 'sides-identical': practice, 'sural-alone': practice, 'side-unlike-referral': practice, 'unknown-technique': practice,
  'proximal-larger': crossing, 'martin-gruber': crossing, 'elbow-position': elbow, 'elbow-position-missing': elbow,
  'short-segment': 'Maynard and Stolov 1972, from memory (about 100 mm); Landau et al. 2003, from memory (60 mm)',
  'f-few-stimuli': 'Fisher MA (secondary source): 10 stimuli come within 1 ms of 100',
  'train-keeps-falling': 'pages of the Norwegian society on slow trains (read)', 'train-rate': 'JNNP teaching table (read)',
  'cold': 'warm rather than correct: AANEM literature review, Denys 1991, from memory',
  'warming-short': 'Drenthen et al., J Clin Neurophysiol 2008;25:104-110 (read): 25 minutes from 28 °C; stopping at 34 °C of the skin left 2 of 9 abnormal',
  'sensory-beside-long-latency': 'Clin Neurol Neurosurg 2016;148:45-48, doi:10.1016/j.clineuro.2016.06.019 (read)',
  'side-amplitude': 'usual 50 %, from memory (Buschbacher; textbooks)',
}

describe('every question', () => {
  it('says what it rests on', () => {
    expect(Object.fromEntries(remarks().map(remark => [remark.code.split('/')[0], remark.source]))).toEqual(sources)
  })
  it('is a sentence with a capital and an end', () => {
    expect(remarks().filter(({ sentence }) => !/^[\p{Lu}\d].*[.?]$/u.test(sentence)).map(remark => remark.sentence)).toEqual([])
  })
})
