import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { expect, it } from 'vitest'
import { assess, run, studyWith } from './study-maker'

it('a study that was changed in place is judged anew', () => {
  const study = studyWith([run('median-motor-apb', 'right', [['wrist', { latencyMs: 3.4, amplitudeMv: 8, distanceMm: 80 }], ['elbow', { latencyMs: 7.4, amplitudeMv: 7.6, distanceMm: 210 }]])])
  const before = assess(study)
  study.runs[0]!.rows[0]!.values.latencyMs = 5.2
  study.patient.birthDate = '2019-03-14'
  const after = assess(study)
  expect(after).toEqual(assess(structuredClone(study)))
  expect([before.flagged, before.person.ageYears]).not.toEqual([after.flagged, after.person.ageYears])
})

/**
 * What hangs on a study must end with its assessment. Kept in a WeakMap of a module it does not: a value that leads back to
 * its key lives until the next full collection, and every quick one copies it (a fifth of the time was spent on that).
 * What several rules ask for belongs on `Facts` or in the study's context; only sets, which live as long as the program,
 * may be keys.
 */
it('no WeakMap of the library has anything but a set as its key', () => {
  const root = 'shared/calculations'
  const files = readdirSync(root, { recursive: true, encoding: 'utf8' }).filter(file => file.endsWith('.ts'))
  const keys = files.flatMap(file => [...readFileSync(join(root, file), 'utf8').matchAll(/new WeakMap(?:<\s*(\w+))?/g)].map(([, key]) => `${file}: ${key ?? 'no type'}`))
  expect(keys.length).toBeGreaterThan(0)
  expect(keys.filter(key => !key.endsWith(': ReferenceTable'))).toEqual([])
})
