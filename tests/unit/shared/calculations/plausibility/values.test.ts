import { describe, expect, it } from 'vitest'
import { asked, right, type Row } from './asking'

const codes = ['zero', 'impossible', 'unusual', 'series-impossible', 'response-and-none']
const median = (...rows: Row[]) => right('median-motor-apb', rows)
const wrist = (values: Row[1]) => median(['wrist', values])
const elbow = (values: Row[1]) => median(['wrist', { latencyMs: 3.5 }], ['elbow', values])
const digit = (values: Row[1]) => right('median-sensory-d2', [['wrist', values]])
const wave = (values: Row[1], series?: Row[2]) => right('median-f-apb', [['wrist', values, series]])
const train = (series: Row[2]) => right('repetitive-ulnar-adm', [['rest', {}, series]])

/** Ranges: number 10 of the decisions on numbers; usual ranges: table of soft and hard ranges (latency 15, amplitudes 25 and 120). */
describe('a number by itself', () => {
  it.each([
    ['the shortest latency there can be', wrist({ latencyMs: 0.3 }), ['check unusual/r/r-0/latencyMs: Latency at wrist is usually between 0.5 and 15 ms; 0.3 was entered.']],
    ['a shorter one', wrist({ latencyMs: 0.29 }), ['stop impossible/r/r-0/latencyMs: Latency at wrist must be between 0.3 and 100 ms; 0.29 was entered.']],
    ['too short for any slip', wrist({ latencyMs: 0.01 }), ['stop impossible/r/r-0/latencyMs: Latency at wrist must be between 0.3 and 100 ms; 0.01 was entered.']],
    ['the shortest usual latency', wrist({ latencyMs: 0.5 }), []],
    ['just under it', wrist({ latencyMs: 0.49 }), ['check unusual/r/r-0/latencyMs: Latency at wrist is usually between 0.5 and 15 ms; 0.49 was entered.']],
    ['the longest usual latency', wrist({ latencyMs: 15 }), []],
    ['a decimal point too late', wrist({ latencyMs: 15.1 }), ['check unusual/r/r-0/latencyMs: Latency at wrist is usually between 0.5 and 15 ms; 15.1 was entered. Is the decimal point missing?']],
    ['the longest latency there can be', wrist({ latencyMs: 100 }), ['check unusual/r/r-0/latencyMs: Latency at wrist is usually between 0.5 and 15 ms; 100 was entered. Is the decimal point missing?']],
    ['a longer one', wrist({ latencyMs: 100.1 }), ['stop impossible/r/r-0/latencyMs: Latency at wrist must be between 0.3 and 100 ms; 100.1 was entered. Is the decimal point missing?']],
    ['two decimals too many', wrist({ latencyMs: 10_000 }), ['stop impossible/r/r-0/latencyMs: Latency at wrist must be between 0.3 and 100 ms; 10000 was entered. Is the decimal point missing?']],
    ['more than a slip of two', wrist({ latencyMs: 10_001 }), ['stop impossible/r/r-0/latencyMs: Latency at wrist must be between 0.3 and 100 ms; 10001 was entered.']],
    ['nothing is rounded away that was typed', wrist({ latencyMs: 0.1234 }), ['stop impossible/r/r-0/latencyMs: Latency at wrist must be between 0.3 and 100 ms; 0.123 was entered.']],
    ['12 ms more from further up', elbow({ latencyMs: 27 }), []],
    ['more than that', elbow({ latencyMs: 27.1 }), ['check unusual/r/r-1/latencyMs: Latency at elbow is usually between 0.5 and 27 ms; 27.1 was entered. Is the decimal point missing?']],
    ['too early from further up', elbow({ latencyMs: 0.4 }), ['check unusual/r/r-1/latencyMs: Latency at elbow is usually between 0.5 and 27 ms; 0.4 was entered.']],
    ['only latencies come later', elbow({ amplitudeMv: 25.1 }), ['check unusual/r/r-1/amplitudeMv: Amplitude at elbow is usually between 0.1 and 25 mV; 25.1 was entered.']],
    ['and only motor ones', right('median-sensory-d2', [['palm', { onsetLatencyMs: 1.5 }], ['wrist', { onsetLatencyMs: 10.1 }]]), ['check unusual/r/r-1/onsetLatencyMs: Onset latency at wrist is usually between 0.5 and 10 ms; 10.1 was entered. Is the decimal point missing?']],
    ['a motor latency in another study', right('median-f-apb', [['wrist', {}], ['wrist', { latencyMs: 16 }]]), ['check unusual/r/r-1/latencyMs: Latency at wrist is usually between 0.5 and 15 ms; 16 was entered. Is the decimal point missing?']],
    ['the smallest motor amplitude there can be', wrist({ amplitudeMv: 0.01 }), ['check unusual/r/r-0/amplitudeMv: Amplitude at wrist is usually between 0.1 and 25 mV; 0.01 was entered. Were volts or microvolts mistaken? Enter millivolts.']],
    ['a smaller one', wrist({ amplitudeMv: 0.009 }), ['stop impossible/r/r-0/amplitudeMv: Amplitude at wrist must be between 0.01 and 50 mV; 0.009 was entered. Were volts or microvolts mistaken? Enter millivolts.']],
    ['the usual ones', wrist({ amplitudeMv: 0.1 }), []],
    ['up to 25', wrist({ amplitudeMv: 25 }), []],
    ['the largest there can be', wrist({ amplitudeMv: 50 }), ['check unusual/r/r-0/amplitudeMv: Amplitude at wrist is usually between 0.1 and 25 mV; 50 was entered.']],
    ['microvolts', wrist({ amplitudeMv: 50_000 }), ['stop impossible/r/r-0/amplitudeMv: Amplitude at wrist must be between 0.01 and 50 mV; 50000 was entered. Were microvolts entered? Enter millivolts.']],
    ['more than microvolts', wrist({ amplitudeMv: 50_001 }), ['stop impossible/r/r-0/amplitudeMv: Amplitude at wrist must be between 0.01 and 50 mV; 50001 was entered.']],
    ['the smallest sensory amplitude there can be', digit({ amplitudeUv: 0.1 }), ['check unusual/r/r-0/amplitudeUv: Amplitude at wrist is usually between 0.5 and 120 µV; 0.1 was entered. Were millivolts entered? Enter microvolts.']],
    ['millivolts', digit({ amplitudeUv: 0.05 }), ['stop impossible/r/r-0/amplitudeUv: Amplitude at wrist must be between 0.1 and 300 µV; 0.05 was entered. Were millivolts entered? Enter microvolts.']],
    ['0.13 mV would be too much as well', digit({ amplitudeUv: 0.13 }), ['check unusual/r/r-0/amplitudeUv: Amplitude at wrist is usually between 0.5 and 120 µV; 0.13 was entered.']],
    ['a sensory amplitude of 120', digit({ amplitudeUv: 120 }), []],
    ['the largest there can be', digit({ amplitudeUv: 300 }), ['check unusual/r/r-0/amplitudeUv: Amplitude at wrist is usually between 0.5 and 120 µV; 300 was entered.']],
    ['a larger one', digit({ amplitudeUv: 301 }), ['stop impossible/r/r-0/amplitudeUv: Amplitude at wrist must be between 0.1 and 300 µV; 301 was entered.']],
    ['a distance in centimetres', wrist({ distanceMm: 8 }), ['stop impossible/r/r-0/distanceMm: Distance at wrist must be between 10 and 300 mm; 8 was entered. Were centimetres entered? Enter millimetres.']],
    ['10 mm, and 300', median(['wrist', { distanceMm: 10 }], ['elbow', { distanceMm: 500 }]), []],
    ['each segment has its own longest', median(['wrist', { distanceMm: 301 }], ['elbow', { distanceMm: 501 }]), ['stop impossible/r/r-0/distanceMm: Distance at wrist must be between 10 and 300 mm; 301 was entered.', 'stop impossible/r/r-1/distanceMm: Distance at elbow must be between 10 and 500 mm; 501 was entered.']],
    ['a site that is not known', median(['knee', { distanceMm: 901 }]), ['stop impossible/r/r-0/distanceMm: Distance at knee must be between 10 and 900 mm; 901 was entered.']],
    ['0', wrist({ latencyMs: 0 }), ['stop zero/r/r-0/latencyMs: Latency at wrist: 0 is no measurement. Enter no response, technical, not done or stopped.']],
    ['under 0', wrist({ latencyMs: -1 }), ['stop zero/r/r-0/latencyMs: Latency at wrist must be above 0.']],
    ['no F-wave among ten', wave({ stimulusCount: 10, responseCount: 0 }), []],
    ['a count under 0', wave({ responseCount: -1 }), ['stop impossible/r/r-0/responseCount: Responses at wrist must be between 0 and 200; -1 was entered.']],
    ['no stimulus at all', wave({ stimulusCount: 0 }), ['stop impossible/r/r-0/stimulusCount: Stimuli at wrist must be between 1 and 200; 0 was entered.']],
    ['an absence is no number', wrist({ latencyMs: 'technical', amplitudeMv: 'not-done' }), []],
    ['beside the line of the nerve too', right('ulnar-motor-adm', [['wrist', { latencyMs: 3 }], ['median-elbow', { amplitudeMv: 60 }]]), ['stop impossible/r/r-1/amplitudeMv: Amplitude at median nerve at the elbow must be between 0.01 and 50 mV; 60 was entered. Were microvolts entered? Enter millivolts.']],
    ['a quantity that the catalogue does not have is left alone', wrist({ unheardOf: 3 } as Row[1]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

describe('a series', () => {
  it.each([
    ['F latencies within', wave({}, [0.3, 100, 'no-response']), []],
    ['a trifle too short', wave({}, [28, 0.2]), ['stop series-impossible/r/r-0: A response of 0.2 ms in the series (wrist) cannot be: it must be between 0.3 and 100 ms.']],
    ['too long', wave({}, [28, 100.1, 200]), ['stop series-impossible/r/r-0: A response of 100.1 ms in the series (wrist) cannot be: it must be between 0.3 and 100 ms.']],
    ['amplitudes within', train([0.01, 50]), []],
    ['too small', train([0.009, 5]), ['stop series-impossible/r/r-0: A response of 0.009 mV in the series (at rest) cannot be: it must be between 0.01 and 50 mV.']],
    ['too large', train([5, 50.1]), ['stop series-impossible/r/r-0: A response of 50.1 mV in the series (at rest) cannot be: it must be between 0.01 and 50 mV.']],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

describe('a number beside no response', () => {
  const motorLine = ['stop response-and-none/r/r-0/amplitudeMv: At wrist a number stands beside no response: correct the latency or the amplitude.']
  const sensoryLine = ['stop response-and-none/r/r-0/amplitudeUv: At wrist a number stands beside no response: correct the latency or the amplitude.']
  it.each([
    ['a latency without a response', wrist({ latencyMs: 3.5, amplitudeMv: 'no-response' }), motorLine],
    ['a response without a latency', wrist({ latencyMs: 'no-response', amplitudeMv: 8 }), motorLine],
    ['both absent', wrist({ latencyMs: 'no-response', amplitudeMv: 'no-response' }), []],
    ['both there', wrist({ latencyMs: 3.5, amplitudeMv: 8 }), []],
    ['technical says nothing about the other', wrist({ latencyMs: 'technical', amplitudeMv: 8 }), []],
    ['nor the other way round', wrist({ latencyMs: 3.5, amplitudeMv: 'technical' }), []],
    ['one of them blank', wrist({ latencyMs: 3.5 }), []],
    ['onset without a response', digit({ onsetLatencyMs: 2.8, amplitudeUv: 'no-response' }), sensoryLine],
    ['peak without a response', digit({ peakLatencyMs: 3.5, amplitudeUv: 'no-response' }), sensoryLine],
    ['response without a peak', digit({ onsetLatencyMs: 2.8, peakLatencyMs: 'no-response', amplitudeUv: 20 }), sensoryLine],
    ['a distance says nothing', digit({ onsetLatencyMs: 'no-response', distanceMm: 140, amplitudeUv: 'no-response' }), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})
