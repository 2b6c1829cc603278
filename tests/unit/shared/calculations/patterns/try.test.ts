import { it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { referenceTables } from '#reference-tables'
import { carpalTunnelStudy, ndtfPolicy } from '/work/main/tests/fixtures/carpal-tunnel-study'
import { patternSets } from '#shared/calculations/patterns'
it('x', () => {
  const policy = { ...ndtfPolicy, patternsOn: patternSets.map(s => s.id) }
  const a = assessStudy(carpalTunnelStudy(), referenceTables, policy)
  for (const p of a.patterns) {
    console.log(`\n## ${p.id} ${p.side ?? ''} => ${p.outcome.met} | ${p.outcome.label}`)
    for (const c of p.criteria) console.log(`   ${c.result.padEnd(14)} ${c.id}: ${c.numbers} ${c.because ? '[' + c.because + ']' : ''}`)
  }
})
