import { techniqueTitle } from '../../catalogue/nerves'
import type { KnownRun, StudyContext } from '../study-context'
import type { RunAssessment } from '../types'
import { sideWords } from '../words'
import { assessFWave } from './f-wave'
import { assessMotor } from './motor'
import { assessBlink, assessHReflex, assessRepetitive } from './reflexes-and-trains'
import { runMaker, type RunMaker } from './run-maker'
import { assessSensory } from './sensory'

/** One rule per kind of run. Needle examination has no numbers to judge. */
const rules: Record<NonNullable<KnownRun['technique']>['kind'], (maker: RunMaker) => void> = {
  'motor': assessMotor,
  'sensory': assessSensory,
  'mixed': assessSensory,
  'f-wave': assessFWave,
  'h-reflex': assessHReflex,
  'repetitive': assessRepetitive,
  'blink': assessBlink,
  'needle': () => undefined,
}

/**
 * Everything about one run but what depends on other runs. A technique that the catalogue does not know keeps its id as
 * title and has no results.
 */
export function assessRun(context: StudyContext, known: KnownRun): RunAssessment {
  const { run, technique, supersededBy } = known
  const title = `${sideWords[run.side]} ${technique ? techniqueTitle(technique) : run.technique}`
  const assessment: RunAssessment = { runId: run.id, technique: run.technique, side: run.side, title, cold: coldSaid(known), results: [] }
  if (supersededBy !== undefined) assessment.supersededBy = supersededBy
  const reason = run.notDoneBecause?.trim()
  if (reason) assessment.notDone = `${technique?.kind === 'needle' ? 'not examined' : 'not done'}: ${reason}`
  if (!technique) return assessment
  const maker = runMaker(context, known, technique)
  rules[technique.kind](maker)
  assessment.results = maker.results
  return assessment
}

/** The reader's reason for interpreting a cold run is printed with it. */
function coldSaid({ cold, run, bearing }: KnownRun): RunAssessment['cold'] {
  const because = run.interpretColdBecause?.trim()
  if (!because || bearing.state !== 'none' || (cold.state !== 'cold' && cold.state !== 'unknown')) return cold
  return { ...cold, because: `${cold.because}; interpreted all the same: ${because}` }
}
