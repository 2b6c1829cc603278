/**
 * Every quantity that can be typed or computed: its label, unit, UCUM code, decimals and ranges.
 *
 * Possible range: outside it the value is stopped. Usual range: outside it the value is questioned.
 * Sources: the ranges are this project's decision, wide enough for severe disease (common practice, no
 * publication). Nerve fibres carry between about 1 and 100 m/s: common practice.
 */
export interface Quantity {
  id: string
  label: string
  /** As people read it: µ is a micro sign. Empty for a pure number. */
  unit: string
  /** For machines: UCUM, case-sensitive. */
  ucum: string
  /** Decimals a person may type. */
  typedDecimals: number
  /** Decimals printed. */
  printDecimals: number
  /** How this kind of number compares: is a larger value slower, smaller or neither? Used by words and bars. */
  kind: 'latency' | 'velocity' | 'amplitude' | 'duration' | 'area' | 'distance' | 'ratio' | 'count' | 'percent' | 'temperature' | 'stimulus' | 'rate'
  possible?: { min: number, max: number }
  usual?: { min: number, max: number }
}

const latency = (id: string, label: string, usualMax = 60): Quantity =>
  ({ id, label, unit: 'ms', ucum: 'ms', typedDecimals: 2, printDecimals: 1, kind: 'latency', possible: { min: 0.3, max: 100 }, usual: { min: 0.5, max: usualMax } })

export const quantities = {
  latencyMs: latency('latencyMs', 'latency', 15),
  onsetLatencyMs: latency('onsetLatencyMs', 'onset', 10),
  peakLatencyMs: latency('peakLatencyMs', 'peak', 12),
  amplitudeMv: { id: 'amplitudeMv', label: 'amplitude', unit: 'mV', ucum: 'mV', typedDecimals: 2, printDecimals: 1, kind: 'amplitude', possible: { min: 0.01, max: 50 }, usual: { min: 0.1, max: 25 } },
  amplitudeUv: { id: 'amplitudeUv', label: 'amplitude', unit: 'µV', ucum: 'uV', typedDecimals: 1, printDecimals: 0, kind: 'amplitude', possible: { min: 0.1, max: 300 }, usual: { min: 0.5, max: 120 } },
  durationMs: { id: 'durationMs', label: 'duration', unit: 'ms', ucum: 'ms', typedDecimals: 2, printDecimals: 1, kind: 'duration', possible: { min: 0.1, max: 60 }, usual: { min: 0.5, max: 20 } },
  areaMvMs: { id: 'areaMvMs', label: 'area', unit: 'mV·ms', ucum: 'mV.ms', typedDecimals: 1, printDecimals: 1, kind: 'area', possible: { min: 0.01, max: 300 }, usual: { min: 0.1, max: 120 } },
  distanceMm: { id: 'distanceMm', label: 'distance', unit: 'mm', ucum: 'mm', typedDecimals: 0, printDecimals: 0, kind: 'distance', possible: { min: 10, max: 900 } },
  stimulusMa: { id: 'stimulusMa', label: 'stimulus', unit: 'mA', ucum: 'mA', typedDecimals: 1, printDecimals: 1, kind: 'stimulus', possible: { min: 0.1, max: 150 } },
  velocityMps: { id: 'velocityMps', label: 'velocity', unit: 'm/s', ucum: 'm/s', typedDecimals: 0, printDecimals: 0, kind: 'velocity', possible: { min: 1, max: 100 }, usual: { min: 15, max: 80 } },
  stimulusCount: { id: 'stimulusCount', label: 'stimuli', unit: '', ucum: '1', typedDecimals: 0, printDecimals: 0, kind: 'count', possible: { min: 1, max: 200 } },
  responseCount: { id: 'responseCount', label: 'responses', unit: '', ucum: '1', typedDecimals: 0, printDecimals: 0, kind: 'count', possible: { min: 0, max: 200 } },
  minimumLatencyMs: latency('minimumLatencyMs', 'minimum', 80),
  meanLatencyMs: latency('meanLatencyMs', 'mean', 80),
  maximumLatencyMs: latency('maximumLatencyMs', 'maximum', 90),
  limbLengthMm: { id: 'limbLengthMm', label: 'stimulus to spine', unit: 'mm', ucum: 'mm', typedDecimals: 0, printDecimals: 0, kind: 'distance', possible: { min: 200, max: 1500 } },
  legLengthMm: { id: 'legLengthMm', label: 'knee crease to inner ankle', unit: 'mm', ucum: 'mm', typedDecimals: 0, printDecimals: 0, kind: 'distance', possible: { min: 100, max: 700 }, usual: { min: 250, max: 500 } },
  mLatencyMs: latency('mLatencyMs', 'M latency', 15),
  hLatencyMs: latency('hLatencyMs', 'H latency', 60),
  mAmplitudeMv: { id: 'mAmplitudeMv', label: 'M amplitude', unit: 'mV', ucum: 'mV', typedDecimals: 2, printDecimals: 1, kind: 'amplitude', possible: { min: 0.01, max: 50 } },
  hAmplitudeMv: { id: 'hAmplitudeMv', label: 'H amplitude', unit: 'mV', ucum: 'mV', typedDecimals: 2, printDecimals: 1, kind: 'amplitude', possible: { min: 0.01, max: 50 } },
  rateHz: { id: 'rateHz', label: 'rate', unit: 'Hz', ucum: 'Hz', typedDecimals: 1, printDecimals: 1, kind: 'rate', possible: { min: 0.1, max: 60 } },
  secondsAfterExercise: { id: 'secondsAfterExercise', label: 'after exercise', unit: 's', ucum: 's', typedDecimals: 0, printDecimals: 0, kind: 'count', possible: { min: 0, max: 900 } },
  r1Ms: latency('r1Ms', 'R1, same side', 20),
  r2IpsilateralMs: latency('r2IpsilateralMs', 'R2, same side', 60),
  r2ContralateralMs: latency('r2ContralateralMs', 'R2, other side', 60),
} as const satisfies Record<string, Quantity>

export type QuantityId = keyof typeof quantities

/** `quantities` with its entries as the plain interface, for code that loops over it. */
export const quantityOf = (id: QuantityId): Quantity => quantities[id]
