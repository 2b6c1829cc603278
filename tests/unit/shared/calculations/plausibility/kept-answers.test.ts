import { describe, expect, it } from 'vitest'
import { cellsBehind } from '#shared/calculations/plausibility/kept-answer'
import type { Run, Study } from '#shared/schemas/study'
import { assess, remarkOf, run, studyWith } from '../study-maker'

const legRun = (distanceMm: number, latencyMs = 4.5): Run => run('fibular-motor-edb', 'right', [['ankle', { latencyMs, amplitudeMv: 5, distanceMm: 80 }], ['below-fibular-head', { latencyMs: 15, amplitudeMv: 4.8, distanceMm }]])
const sural = (amplitudeUv: number, changes: Partial<Run> = {}): Run => run('sural', 'right', [['calf', { onsetLatencyMs: 3.2, peakLatencyMs: 4, amplitudeUv, distanceMm: 140 }]], changes)

/** The study with the question of this code answered as the bench stores it. */
function answering(study: Study, code: string): Study {
  const remark = assess(study).remarks.find(one => one.code === code)!
  return { ...study, keptChecks: [{ key: remark.key, reason: 'Measured twice.', sentence: remark.sentence, cells: cellsBehind(study, remark) }] }
}
const keptIn = (study: Study, keptChecks: Study['keptChecks'], code: string) => remarkOf(assess({ ...study, keptChecks }), code)?.kept

describe('an answer stays with what it answered', () => {
  it.each([
    ['one cell of another column changes', 'distance-unusual', legRun(530), legRun(530, 4.6), 'Measured twice.'],
    ['the cell itself changes', 'distance-unusual', legRun(530), legRun(540), undefined],
    ['a value of the run changes that its velocity rests on', 'velocity-unusual', run('median-motor-apb', 'right', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 6.4, distanceMm: 215 }]]), run('median-motor-apb', 'right', [['wrist', { latencyMs: 4.1 }], ['elbow', { latencyMs: 6.4, distanceMm: 215 }]]), undefined],
    ['a value is added to the run', 'velocity-unusual', run('median-motor-apb', 'right', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 6.4, distanceMm: 215 }]]), run('median-motor-apb', 'right', [['wrist', { latencyMs: 4, durationMs: 5 }], ['elbow', { latencyMs: 6.4, distanceMm: 215 }]]), 'Measured twice.'],
  ])('%s', (_, code, before, after, kept) => {
    const { keptChecks } = answering(studyWith([before]), code)
    expect(keptIn(studyWith([before]), keptChecks, code)).toBe('Measured twice.')
    expect(keptIn(studyWith([after]), keptChecks, code)).toBe(kept)
  })

  it('a missing temperature is asked for again when a value of that limb changes, not when another run is added', () => {
    const cold = { temperatures: [] }
    const code = 'temperature-missing/right-foot'
    const { keptChecks } = answering(studyWith([sural(6)], cold), code)
    expect(keptIn(studyWith([sural(6)], cold), keptChecks, code)).toBe('Measured twice.')
    expect(keptIn(studyWith([sural(7)], cold), keptChecks, code)).toBeUndefined()
    expect(keptIn(studyWith([sural(6), legRun(330)], cold), keptChecks, code)).toBe('Measured twice.')
  })

  it('a cold run asks again at another temperature', () => {
    const at = (celsius: number) => ({ temperatures: [{ id: 't', segment: 'foot' as const, side: 'right' as const, celsius, warmed: false }] })
    const { keptChecks } = answering(studyWith([sural(6)], at(27.8)), 'cold')
    expect(keptIn(studyWith([sural(6)], at(27.8)), keptChecks, 'cold')).toBe('Measured twice.')
    expect(keptIn(studyWith([sural(6)], at(28.4)), keptChecks, 'cold')).toBeUndefined()
  })
})
