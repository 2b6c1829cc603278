import type { Side } from '../../schemas/common'
import type { Facts } from './facts'
import { criterion, decided, notAssessable, type Bar, type Criterion, type CriterionText, type Finding } from './finding'
import { amplitudeFallIn, concordant, dropAbove, otherNervesNormal, segmentBelow, slowSegment, velocityDropIn, type SegmentQuestion } from './localised'
import { eachOnce, type Assessed, type PatternSet } from './pattern-set'

const SEGMENT = 'across-elbow'
/** m/s: 97th percentile of the drop across the elbow, Buschbacher 1999 (read). */
const publishedDrop: Bar = { op: 'above', value: 15 }
/** Amplitude ratio above to below the elbow under 0.82 is a fall above 18 %: 150 controls (read). */
const publishedFall: Bar = { op: 'above', value: 18 }
const NEEDED = 2

const muscles = [
  { technique: 'ulnar-motor-adm', short: 'ADM' },
  { technique: 'ulnar-motor-fdi', short: 'FDI' },
] as const

const texts = {
  velocity: { id: 'velocity', text: 'Velocity across the elbow below the limit of the sets in use', basis: 'read' },
  drop: { id: 'drop', text: 'Velocity across the elbow slower than in the forearm by more than the published normal drop (the limit of the sets in use, else 15 m/s; another study of 227 healthy people gives 16.5 m/s as mean + 2 SD)', basis: 'read' },
  fall: { id: 'amplitude', text: 'Amplitude fall from below to above the elbow above 18 % (ratio below 0.82)', basis: 'read' },
  others: { id: 'others', text: 'Beside: other nerves within their limits', basis: 'derived' },
} as const satisfies Record<string, CriterionText>

/**
 * Ulnar neuropathy at the elbow against published normal values; two concordant findings are asked for, in one muscle or
 * in two, since a drop alone is often found in health. It never says that the lesion is the only one.
 */
export const ulnarElbow: PatternSet = {
  id: 'ulnar-elbow', version: 1, title: 'Ulnar nerve at the elbow, against published normal values', basis: 'read', scope: 'side',
  source: 'Buschbacher RM, Am J Phys Med Rehabil 1999;78(S):S9-S14, doi:10.1097/00002060-199911001-00003; 227 volunteers, J Brachial Plex Peripher Nerve Inj 2013;8:2; 150 controls (abstract read). Two concordant findings: Campbell WW et al., Muscle Nerve 1999;22:408-411, from memory',
  criteria: Object.values(texts),
  assess: (facts, side) => assessElbow(facts, side, question => [
    [texts.velocity, slowSegment(question)], [texts.drop, velocityDropIn(question, publishedDrop)], [texts.fall, amplitudeFallIn(question, publishedFall)],
  ], () => [criterion(texts.others, otherNervesNormal(facts, side, ['ulnar', 'dorsal-ulnar']))]),
}

const recalled = {
  slow: { id: 'slow', text: 'Velocity across the elbow below 50 m/s', basis: 'memory' },
  drop: { id: 'drop', text: 'Velocity across the elbow more than 10 m/s slower than in the forearm', basis: 'memory' },
  fall: { id: 'amplitude', text: 'Amplitude fall from below to above the elbow above 20 %, without anomalous innervation', basis: 'memory' },
  publishedDrop: { id: 'published-drop', text: 'Beside: drop above the published normal drop of 15 m/s', basis: 'read' },
  position: { id: 'position', text: 'Beside: elbow flexed 70 to 90 degrees', basis: 'memory' },
  others: { id: 'others', text: 'Beside: other nerves within their limits', basis: 'derived' },
} as const satisfies Record<string, CriterionText>

/** The same nerve by the practice parameter of 1999, whose numbers rest on memory. */
export const ulnarElbow1999: PatternSet = {
  id: 'ulnar-elbow-parameter-1999', version: 1, title: 'Ulnar nerve at the elbow, practice parameter of 1999', basis: 'memory', scope: 'side',
  source: 'Campbell WW et al., AAEM/AAN/AAPMR practice parameter, Muscle Nerve 1999;22:408-411; numbers recalled. Published normal drop: Buschbacher 1999, doi:10.1097/00002060-199911001-00003 (read)',
  criteria: Object.values(recalled),
  assess: (facts, side) => assessElbow(facts, side, question => [
    [recalled.slow, segmentBelow(question, { op: 'below', value: 50 })],
    [recalled.drop, dropAbove(question, { op: 'above', value: 10 })],
    [recalled.fall, amplitudeFallIn(question, { op: 'above', value: 20 })],
  ], questions => [
    ...questions.map(({ question, short }) => muscleCriterion(recalled.publishedDrop, short, dropAbove(question, publishedDrop))),
    criterion(recalled.position, positionOf(questions.map(({ question }) => question))),
    criterion(recalled.others, otherNervesNormal(facts, side, ['ulnar', 'dorsal-ulnar'])),
  ]),
}

type Counted = [CriterionText, Finding][]
interface MuscleQuestion { question: SegmentQuestion, short: string }

function assessElbow(facts: Facts, side: Side, counted: (question: SegmentQuestion) => Counted, beside: (questions: MuscleQuestion[]) => Criterion[]): Assessed | null {
  const questions = muscles.map(({ technique, short }) => ({ question: { facts, run: facts.run(technique, side), segment: SEGMENT }, short }))
    .filter(({ question }) => question.run?.assessment.results.some(result => result.at === 'above-elbow'))
  if (questions.length === 0) return null
  const findings = questions.flatMap(({ question, short }) => counted(question).map(([text, finding]) => ({ text, short, finding })))
  const criteria = [...findings.map(({ text, short, finding }) => muscleCriterion(text, short, finding)), ...beside(questions)]
  const { met, count } = concordant(findings.map(({ finding }) => finding), NEEDED)
  const isolated = criteria.find(one => one.id === 'others')?.result
  return { outcome: { met, label: labelOf(met, count, findings.length, isolated === 'not-met') }, criteria, runIds: eachOnce(questions.map(({ question }) => question.run?.id)) }
}

const muscleCriterion = (text: CriterionText, short: string, finding: Finding): Criterion =>
  criterion({ ...text, id: `${short.toLowerCase()}-${text.id}`, text: `${short}: ${text.text}` }, finding)

function labelOf(met: Assessed['outcome']['met'], count: number, all: number, othersOutside: boolean): string {
  const found = `${count} of ${all} findings`
  const beside = othersOutside && count > 0 ? '; other nerves are outside their limits too' : ''
  if (met === 'met') return `${found}${beside}`
  return met === 'not-assessable' ? `${found}, others not assessable${beside}` : `${found}, ${NEEDED} asked for${beside}`
}

function positionOf(questions: readonly SegmentQuestion[]): Finding {
  const angle = questions.map(({ run }) => run?.recorded?.elbowFlexionDegrees).find(degrees => degrees !== undefined)
  return angle === undefined ? notAssessable('elbow flexion not noted') : decided(angle >= 70 && angle <= 90, `${angle} degrees`)
}
