import { correctedLatency, correctedVelocity, REFERENCE_CELSIUS } from '../temperature-correction'
import type { PlacedRow } from '../placed-rows'
import { add, type RunMaker } from './run-maker'

/** The temperature-corrected value beside the measured one, where the organisation turned that on and the limb was cold. */
export function addCorrected(maker: RunMaker, placed: PlacedRow, what: 'velocity' | 'latency', measured: number): void {
  const { celsius, state } = maker.known.cold
  if (!maker.context.policy.temperatureCorrection || celsius === null || state !== 'cold') return
  const { nerve, kind } = maker.technique
  const isVelocity = what === 'velocity'
  add(maker, placed, {
    typed: false, at: placed.row.site,
    quantity: isVelocity ? 'correctedVelocityMps' : 'correctedLatencyMs',
    label: `${what}, corrected from ${celsius} to ${REFERENCE_CELSIUS} °C`,
    value: isVelocity ? correctedVelocity({ velocityMps: measured, celsius, nerve, kind }) : correctedLatency({ latencyMs: measured, celsius }),
    how: isVelocity
      ? { formula: 'linear: measured + slope x (34 °C - measured temperature)', source: 'Halar et al., Arch Phys Med Rehabil 1980 to 1983, from memory' }
      : { formula: 'linear: measured - 0.2 ms x (34 °C - measured temperature)', source: 'Kim, Ann Clin Neurophysiol 2006;8:125-134' },
  })
}
