import { techniqueTitle } from '../catalogue/nerves'
import type { Technique } from '../catalogue/types'
import { fingerprint } from './fingerprint'
import { STANDS_FOR } from './make-result'
import { decimalsFor, quantityInfo } from './quantity-info'
import { printLimit } from './round-for-print'
import type { recordedRun } from './study-context'
import type { AppliedLimit, ComparisonAssessment, FindingSentence, Result, RunAssessment } from './types'
import { englishFindings, type FindingWords } from './finding-words'
import { capital } from './words'

/**
 * Draft findings: one plain sentence per run and per comparison, made from the numbers and tied to their runs.
 *
 * They describe and never interpret: no diagnosis, no cause, no word for what an amplitude that falls might mean. The
 * order is that of the runs, then of the comparisons. A superseded run has no sentence.
 *
 * @example
 * // RIGHT median sensory, digit 2 (140 mm): onset latency 3.8 ms (above the limit, ≤ 3.3), …
 */
export function draftFindings({ known }: { known: ReadonlyMap<string, Told> }, runs: readonly RunAssessment[], comparisons: readonly ComparisonAssessment[], words: FindingWords = englishFindings): FindingSentence[] {
  const sentences: FindingSentence[] = []
  for (const run of runs) {
    const told = known.get(run.runId)
    if (!told || run.supersededBy !== undefined) continue
    sentences.push(sentence(`run/${run.runId}`, [run.runId], runText(told, run, words)))
  }
  for (const comparison of comparisons) {
    const said = comparisonText(comparison, words)
    if (said) sentences.push(sentence(`compare/${comparison.side ?? 'both'}/${comparison.id}`, comparison.runIds, said))
  }
  return sentences
}

/** What a sentence needs to know of its run beside the assessment. */
export type Told = ReturnType<typeof recordedRun>

function sentence(key: string, runIds: string[], text: string): FindingSentence {
  return { key, runIds, text, fingerprint: fingerprint(text) }
}

function runText(known: Told, run: RunAssessment, words: FindingWords): string {
  const title = titleOf(known, run, words)
  if (run.notDone !== undefined) return `${title}: ${words.say(run.notDone.replace(/\.$/, ''))}.`
  if (known.technique?.kind === 'needle') return needleText(title, known, known.technique, words)
  if (!known.measured) return `${title}: ${words.nothingRecorded}.`
  const isBeside = (result: Result) => result.quantity === 'amplitudeMv' && known.asides.some(({ row }) => row.id === result.rowId)
  const told = run.results.filter(result => isTold(result) || isBeside(result))
  const cold = coldWords(run, words)
  if (told.length === 0) return `${title}: ${words.nothingToJudge}${cold}.`
  if (cold === '' && told.every(isClearlyWithin)) return `${title}: ${words.listed(within(told, words))} ${words.withinLimits}.`
  return `${title}: ${told.map(value => valueText(value, words)).join(', ')}${cold}.`
}

/** "RIGHT median sensory, digit 2 (140 mm)". */
function titleOf(known: Told, run: RunAssessment, words: FindingWords): string {
  const { technique } = known
  if (!technique) return words.say(run.title)
  const title = `${words.sides[run.side]} ${words.say(techniqueTitle(technique))}`
  const distance = technique.kind === 'sensory' || technique.kind === 'mixed' ? known.rows[0]?.row.values.distanceMm : undefined
  return typeof distance === 'number' ? `${title} (${distance} mm)` : title
}

/** The values a sentence tells: those judged, those that should have been, velocities and absent responses. */
function isTold(result: Result): boolean {
  const { kind } = result.verdict
  if (kind === 'within' || kind === 'outside' || kind === 'absent' || kind === 'cold' || kind === 'not-judged') return true
  if (result.value.kind === 'absent') return true
  if (kind !== 'no-limit' || result.value.kind !== 'value') return false
  return !result.verdict.because.startsWith(STANDS_FOR)
}

const isClearlyWithin = ({ verdict }: Result) => verdict.kind === 'within' && !verdict.nearLimit

/** Each kind of number once: "latency, amplitude and velocity". */
function within(results: readonly Result[], words: FindingWords): string[] {
  return [...new Set(results.map(result => words.say(quantityInfo(result.quantity).label)))]
}

function withUnit(result: Result, words: FindingWords): string {
  if (result.value.kind !== 'value') return words.say(result.print)
  return result.unit === '' ? result.print : `${result.print} ${result.unit}`
}

/**
 * A value with what its limit says.
 *
 * @example valueText(result, englishFindings) // => 'velocity across the elbow 38 m/s (below the limit, ≥ 43)'
 */
export function valueText(result: Result, words: FindingWords): string {
  const remark = verdictText(result, words)
  return `${words.say(result.label).replaceAll(',', '')} ${withUnit(result, words)}${remark ? ` (${remark})` : ''}`
}

function verdictText({ verdict, quantity, value }: Result, words: FindingWords): string {
  const near = (isNearLimit: boolean) => isNearLimit ? `, ${words.nearer}` : ''
  switch (verdict.kind) {
    case 'within': return `${words.withinTheLimit}, ${limitsText(verdict.limits, quantity, words)}${near(verdict.nearLimit)}`
    case 'outside': return `${words[verdict.direction]}, ${limitsText([verdict.limit], quantity, words)}${near(verdict.nearLimit)}`
    case 'absent': return `${words.limit} ${limitsText(verdict.limits, quantity, words)}`
    case 'cold': return words.say(verdict.because.split(':')[0] as string)
    case 'no-limit': return value.kind === 'value' ? `${words.noLimit}: ${words.say(verdict.because)}` : ''
    case 'not-judged': return value.kind === 'value' ? `${words.notJudged}: ${words.say(verdict.because)}` : ''
    default: return ''
  }
}

function limitsText(limits: readonly AppliedLimit[], quantity: string, words: FindingWords): string {
  const info = quantityInfo(quantity)
  return limits.map(limit => `${limit.bound === 'upper' ? '≤' : '≥'} ${printLimit(limit.value, info.unit === 'µV' ? info.printDecimals : decimalsFor(info, limit.value))}`).join(` ${words.and} `)
}

function coldWords({ cold, results }: RunAssessment, words: FindingWords): string {
  if (cold.state !== 'cold' && cold.state !== 'unknown') return ''
  if (cold.because.includes(INTERPRETED_ALL_THE_SAME)) return `; ${words.say(cold.because)}`
  return results.some(result => result.verdict.kind === 'cold') ? `; ${words.say(cold.because)}` : ''
}
const INTERPRETED_ALL_THE_SAME = 'interpreted all the same'

function needleText(title: string, known: Told, technique: Technique, words: FindingWords): string {
  const labels = new Map((technique.ordinals ?? []).map(ordinal => [ordinal.id, ordinal.label]))
  const said = known.run.rows.flatMap(row => Object.entries(row.ordinals ?? {}).map(([id, choice]) => `${words.say(labels.get(id) ?? id)} ${words.say(choice)}`))
  return said.length > 0 ? `${title}: ${said.join(', ')}.` : `${title}: ${words.nothingRecorded}.`
}

/** Side differences are told only where a set has a limit; the others also where there is no number, with the reason. */
function comparisonText(comparison: ComparisonAssessment, words: FindingWords): string | null {
  const isSides = comparison.side === undefined
  const told = isSides ? comparison.results.filter(({ verdict }) => 'limits' in verdict) : comparison.results
  if (told.length === 0) return null
  const title = capital(words.say(comparison.title))
  const missing = told.filter(result => result.value.kind === 'not-computable')
  const [first] = missing
  if (missing.length === told.length && first?.value.kind === 'not-computable') return `${title}: ${words.notComputable}: ${words.say(first.value.because.replace(/\b(right|left)\b/, side => side.toUpperCase()))}.`
  if (told.every(isClearlyWithin)) return `${title}: ${told.map(result => `${words.say(result.label)} ${withUnit(result, words)}`).join(', ')}, ${words.withinLimits}.`
  return `${title}: ${told.map(result => comparedText(result, words)).join(', ')}.`
}

function comparedText(result: Result, words: FindingWords): string {
  return result.value.kind === 'not-computable' ? `${words.say(result.label)} ${words.notComputable}: ${words.say(result.value.because)}` : valueText(result, words)
}
