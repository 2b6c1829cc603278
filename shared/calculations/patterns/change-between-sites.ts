import { siteOf } from '../../catalogue/nerves'
import type { Side } from '../../schemas/common'
import { definiteIn, dispersion, lowRatio, overPairs, probableIn, type PairRule } from './change-rules'
import type { Facts, RunFacts } from './facts'
import { anyOf, criterion, notAssessable, type Criterion, type CriterionText, type Finding, type Truth } from './finding'
import { motorRun, type MotorRun } from './motor-nerves'
import { entrapmentCriterion, entrapmentText, eachOnce, type Assessed, type PatternSet } from './pattern-set'

/** The paper names median, ulnar and fibular; the radial nerve is asked the same questions (derived). The tibial is left out. */
const nerves = [
  { technique: 'median-motor-apb', name: 'median', named: true, arm: true },
  { technique: 'ulnar-motor-adm', name: 'ulnar to ADM', named: true, arm: true },
  { technique: 'ulnar-motor-fdi', name: 'ulnar to FDI', named: true, arm: true },
  { technique: 'radial-motor-eip', name: 'radial', named: false, arm: true },
  { technique: 'fibular-motor-edb', name: 'fibular to EDB', named: true, arm: false },
  { technique: 'fibular-motor-ta', name: 'fibular to TA', named: true, arm: false },
] as const
type Nerve = (typeof nerves)[number]

const texts = {
  definite: { id: 'definite', text: 'definite block: area fall at least 50 %, duration rise at most 30 %, distal amplitude above 1 mV and above 20 % of its lower limit', basis: 'read' },
  probable: { id: 'probable', text: 'at least probable block: area fall at least 30 % over a long segment of the arm with a duration rise of at most 30 %, or area fall at least 50 %', basis: 'read' },
  dispersion: { id: 'dispersion', text: 'dispersion: duration rise above 30 %', basis: 'read' },
  ratio: { id: 'ratio', text: 'proximal to distal amplitude below 0.5, or below 0.36 where the distal amplitude is at most 1 mV (beyond what loss of motor neurons alone gave)', basis: 'read' },
} as const satisfies Record<string, CriterionText>
type TextId = keyof typeof texts
const textIds = Object.keys(texts) as TextId[]

/** The same words for each nerve. */
const textsFor = Object.fromEntries(nerves.map(nerve => [nerve.technique, textsOf(nerve)])) as Record<Nerve['technique'], Record<TextId, CriterionText>>

function textsOf({ technique, name, named }: Nerve): Record<TextId, CriterionText> {
  const entries = textIds.map((id): [TextId, CriterionText] => {
    const { text, basis } = texts[id]
    return [id, { id: `${technique}/${id}`, text: `${name}: ${text}${named ? '' : ' (nerve not named by the source)'}`, basis: named ? basis : 'derived' }]
  })
  return Object.fromEntries(entries) as Record<TextId, CriterionText>
}

/**
 * How the motor response changes between sites, by EFNS/PNS 2010, with limits that depend on the distal amplitude beside
 * it. Every pair of sites counts, not only neighbours.
 */
export const changeBetweenSites: PatternSet = {
  id: 'change-between-sites-2010', version: 1, title: 'Motor response between sites: block and dispersion', basis: 'read', scope: 'side',
  source: 'EFNS/PNS guideline on multifocal motor neuropathy, J Peripher Nerv Syst 2010;15:295-301, doi:10.1111/j.1529-8027.2010.00290.x; amplitude-dependent limits: Clin Neurophysiol 2000;111:1388-1394, doi:10.1016/s1388-2457(00)00329-1',
  criteria: [...Object.values(texts), entrapmentText],
  assess: assessChange,
}

interface Asked { nerve: Nerve, run: RunFacts, findings: Record<TextId, Finding> }

function assessChange(facts: Facts, side: Side): Assessed | null {
  const asked: Asked[] = []
  for (const nerve of nerves) {
    const run = facts.run(nerve.technique, side)
    if (run && isStimulatedTwice(run)) asked.push({ nerve, run, findings: findingsOf(facts, motorRun(facts, run), nerve.arm) })
  }
  if (asked.length === 0) return null
  const criteria: Criterion[] = []
  for (const one of asked) criteria.push(...criteriaOf(one))
  const outcome = outcomeOf(asked, anyOf(criteria.map(one => one.result)))
  criteria.push(entrapmentCriterion(facts))
  return { outcome, criteria, runIds: eachOnce(asked.map(({ run }) => run.id)) }
}

function isStimulatedTwice({ assessment }: RunFacts): boolean {
  let first: string | undefined
  for (const { quantity, at = '' } of assessment.results) {
    if ((quantity !== 'amplitudeMv' && quantity !== 'areaMvMs') || siteOf(assessment.technique, at)?.aside) continue
    if (first !== undefined && first !== at) return true
    first = at
  }
  return false
}

function findingsOf(facts: Facts, run: MotorRun, arm: boolean): Record<TextId, Finding> {
  const pairs = facts.input.policy.leaveOutEntrapmentSites ? run.pairs.filter(pair => !pair.entrapment) : run.pairs
  const ask = (rule: PairRule) => run.facts.cold
    ? notAssessable(run.facts.cold)
    : pairs.length === 0 ? notAssessable('no pair of sites is left') : overPairs(pairs, rule)
  return {
    definite: ask(definiteIn(facts, run)),
    probable: ask(probableIn(arm)),
    dispersion: ask(dispersion),
    ratio: ask(lowRatio),
  }
}

function criteriaOf({ nerve, findings }: Asked): Criterion[] {
  return textIds.map(id => criterion(textsFor[nerve.technique][id], findings[id]))
}

function outcomeOf(asked: readonly Asked[], met: Truth): Assessed['outcome'] {
  const namesOf = (id: TextId) => asked.filter(({ findings }) => findings[id].result === 'met').map(({ nerve }) => nerve.name)
  const definite = namesOf('definite')
  const probable = namesOf('probable').filter(name => !definite.includes(name))
  const said = [
    definite.length > 0 && `definite: ${definite.join(', ')}`,
    probable.length > 0 && `at least probable: ${probable.join(', ')}`,
    namesOf('dispersion').length > 0 && `dispersion: ${namesOf('dispersion').join(', ')}`,
    namesOf('ratio').length > 0 && `amplitude ratio: ${namesOf('ratio').join(', ')}`,
  ].filter(part => part !== false)
  if (met === 'met') return { met, label: said.join('; ') }
  return { met, label: met === 'not-met' ? 'none' : 'none in what could be assessed' }
}
