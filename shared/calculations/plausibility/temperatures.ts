import type { LimbTemperature, Study } from '../../schemas/study'
import { roundForPrint } from '../round-for-print'
import type { KnownRun, StudyContext } from '../study-context'
import { addRemark, runName, sideWord, type RemarkList } from './remark'

/** Time under a warm blanket that brought all nerves into range, in minutes. */
const WARMING_MINUTES = 25
const WARMING_SOURCE = 'Drenthen et al., J Clin Neurophysiol 2008;25:104-110 (read): 25 minutes from 28 °C; stopping at 34 °C of the skin left 2 of 9 abnormal'

/** Limb temperatures: missing, too cold to judge by, named wrongly, warmed too shortly. */
export function remarkOnTemperatures(list: RemarkList, context: StudyContext): void {
  const told = new Set<string>()
  for (const known of context.runs) {
    if (!known.measured || known.supersededBy !== undefined) continue
    remarkOnNamedReading(list, known, context)
    if (known.bearing.state !== 'none') remarkOnCold(list, known, told)
  }
  remarkOnWarming(list, context.study)
  for (const reading of context.study.temperatures) {
    if (reading.celsius > 38) addRemark(list, { code: `temperature-high/${reading.id}`, strength: 'check', sentence: `${roundForPrint(reading.celsius, 1)} °C is warm for the skin of a ${reading.segment}: check the probe.` })
  }
}

function remarkOnNamedReading(list: RemarkList, { run, technique }: KnownRun, context: StudyContext): void {
  if (run.temperatureId === undefined || !technique?.temperatureSegment) return
  const reading = context.study.temperatures.find(one => one.id === run.temperatureId)
  if (reading && reading.segment === technique.temperatureSegment && reading.side === run.side) return
  const what = reading ? `of the ${sideWord(reading.side)} ${reading.segment}` : 'that no longer exists'
  addRemark(list, { code: 'temperature-elsewhere', strength: 'check', runId: run.id, sentence: `${runName({ run, technique })} names a temperature ${what}: choose one of the ${sideWord(run.side)} ${technique.temperatureSegment}.` })
}

/** Without any reading: once per limb. Too cold: for each run, since each is repeated by itself. */
function remarkOnCold(list: RemarkList, known: KnownRun, told: Set<string>): void {
  const { run, technique, cold } = known
  if (!technique) return
  const limb = `${sideWord(run.side)} ${technique.temperatureSegment}`
  if (cold.state === 'unknown') {
    if (told.has(limb)) return
    told.add(limb)
    addRemark(list, { code: `temperature-missing/${run.side}-${technique.temperatureSegment}`, strength: 'check', sentence: `Enter the temperature of the ${limb}: without one the limb counts as cold, and slowing cannot be judged.` })
    return
  }
  addRemark(list, {
    code: 'cold', strength: 'check', runId: run.id, sentence: `${runName(known)} was recorded cold (${cold.because}): slowing is not interpretable.`,
    suggestion: { sentence: 'Warm the limb and repeat the run.', addTechnique: technique.id, side: run.side },
    source: 'warm rather than correct: AANEM literature review, Denys 1991, from memory',
  })
}

/** A limb whose skin was warmed for less time than its nerves need. */
function remarkOnWarming(list: RemarkList, study: Study): void {
  const lastCold = new Map<string, LimbTemperature>()
  const timed = study.temperatures.filter(reading => reading.at !== undefined).sort((a, b) => Date.parse(a.at as string) - Date.parse(b.at as string))
  for (const reading of timed) {
    const limb = `${reading.side}-${reading.segment}`
    const before = lastCold.get(limb)
    if (!reading.warmed) lastCold.set(limb, reading)
    if (!reading.warmed || !before) continue
    const minutes = (Date.parse(reading.at as string) - Date.parse(before.at as string)) / 60_000
    if (minutes < WARMING_MINUTES && before.celsius < 32) {
      addRemark(list, { code: `warming-short/${reading.id}`, strength: 'note', source: WARMING_SOURCE, sentence: `The ${sideWord(reading.side)} ${reading.segment} was warmed for ${roundForPrint(minutes, 0)} minutes from ${roundForPrint(before.celsius, 1)} °C: skin warms before the nerve, ${WARMING_MINUTES} minutes are safer.` })
    }
  }
}
