import { expect, it } from 'vitest'
import { assess, run, studyWith } from '../../shared/calculations/study-maker'
import { patchOf, withPatch } from '../../../../app/utils/runs-patch'

const study = (latencyMs: number, more = false) => studyWith([
  run('median-motor-apb', 'right', [['wrist', { latencyMs, amplitudeMv: 8, distanceMm: 80 }]]),
  run('ulnar-motor-adm', 'right', [['wrist', { latencyMs: 2.9, amplitudeMv: 9, distanceMm: 80 }]]),
  ...(more ? [run('sural', 'left', [['calf', { onsetLatencyMs: 3 }]])] : []),
])
const [before, after, larger] = [assess(study(3.5)), assess(study(5.2)), assess(study(5.2, true))]

it('a patch holds what changed, and what did not keeps its objects', () => {
  const patch = patchOf(before, after)
  expect(patch.runs.map(each => each.technique)).toEqual(['median-motor-apb'])
  expect(Object.keys(patch.parts)).not.toContain('person')
  const patched = withPatch(before, patch)
  expect(patched).toEqual(after)
  expect(patched.runs[1]).toBe(before.runs[1])
  expect(patched.person).toBe(before.person)
})

it.each([['from nothing', undefined, after], ['a run was added', after, larger], ['a run was taken away', larger, before], ['nothing changed', after, after]])('%s', (_, from, to) => {
  expect(withPatch(from, JSON.parse(JSON.stringify(patchOf(from, to))))).toEqual(JSON.parse(JSON.stringify(to)))
})

it('a part that is gone is taken away', () => {
  const seen: { runs: { id: string }[], visits?: string[] } = { runs: [{ id: 'a' }], visits: ['first'] }
  const gone: typeof seen = { runs: [{ id: 'a' }] }
  expect(withPatch(seen, structuredClone(patchOf(seen, gone)))).toEqual(gone)
})

it('of a study that was typed into one run is sent', () => {
  const [was, is] = [study(3.5), study(5.2)]
  expect(patchOf(was, is).runs.map(each => each.id)).toEqual([is.runs[0]?.id])
  expect(withPatch(was, structuredClone(patchOf(was, is)))).toEqual(is)
})
