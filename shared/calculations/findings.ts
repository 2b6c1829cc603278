import { techniqueTitle } from '../catalogue/nerves'
import type { Technique } from '../catalogue/types'
import { fingerprint } from './fingerprint'
import { STANDS_FOR } from './make-result'
import { decimalsFor, quantityInfo } from './quantity-info'
import { printLimit } from './round-for-print'
import type { KnownRun, StudyContext } from './study-context'
import type { AppliedLimit, ComparisonAssessment, FindingSentence, Result, RunAssessment } from './types'
import { capital, listed, sideWords } from './words'

/**
 * Draft findings: one plain sentence per run and per comparison, made from the numbers and tied to their runs.
 *
 * They describe and never interpret: no diagnosis, no cause, no word for what an amplitude that falls might mean. The
 * order is that of the runs, then of the comparisons. A superseded run has no sentence.
 *
 * @example
 * // RIGHT median sensory, digit 2 (140 mm): onset latency 3.8 ms (above the limit, ≤ 3.3), …
 */
export function draftFindings(context: StudyContext, runs: readonly RunAssessment[], comparisons: readonly ComparisonAssessment[]): FindingSentence[] {
  const sentences: FindingSentence[] = []
  for (const run of runs) {
    const known = context.known.get(run.runId)
    if (!known || run.supersededBy !== undefined) continue
    sentences.push(sentence(`run/${run.runId}`, [run.runId], runText(known, run)))
  }
  for (const comparison of comparisons) {
    const said = comparisonText(comparison)
    if (said) sentences.push(sentence(`compare/${comparison.side ?? 'both'}/${comparison.id}`, comparison.runIds, said))
  }
  return sentences
}

function sentence(key: string, runIds: string[], text: string): FindingSentence {
  return { key, runIds, text, fingerprint: fingerprint(text) }
}

function runText(known: KnownRun, run: RunAssessment): string {
  const title = titleOf(known, run)
  if (run.notDone !== undefined) return `${title}: ${run.notDone.replace(/\.$/, '')}.`
  if (known.technique?.kind === 'needle') return needleText(title, known, known.technique)
  if (!known.measured) return `${title}: nothing recorded.`
  const beside = new Set(known.asides.map(({ row }) => row.id))
  const told = run.results.filter(result => isTold(result) || (beside.has(result.rowId ?? '') && result.quantity === 'amplitudeMv'))
  const cold = coldWords(run)
  if (told.length === 0) return `${title}: ${run.results.length > 0 ? 'recorded, nothing to judge' : 'nothing recorded'}${cold}.`
  const judged = told.filter(result => result.verdict.kind === 'within')
  if (judged.length === told.length && cold === '' && !told.some(isNear)) return `${title}: ${listed(within(told))} within limits.`
  return `${title}: ${told.map(value => valueText(value)).join(', ')}${cold}.`
}

/** "RIGHT median sensory, digit 2 (140 mm)". */
function titleOf(known: KnownRun, run: RunAssessment): string {
  const { technique } = known
  if (!technique) return run.title
  const title = `${sideWords[run.side]} ${techniqueTitle(technique)}`
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

const isNear = (result: Result) => result.verdict.kind === 'within' && result.verdict.nearLimit

/** Each kind of number once: "latency, amplitude and velocity". */
function within(results: readonly Result[]): string[] {
  return [...new Set(results.map(result => quantityInfo(result.quantity).label))]
}

function withUnit(result: Result): string {
  return result.value.kind === 'value' && result.unit ? `${result.print} ${result.unit}` : result.print
}

/** "velocity across the elbow 38 m/s (below the limit, ≥ 43)". */
function valueText(result: Result): string {
  const remark = verdictText(result)
  return `${result.label.replaceAll(',', '')} ${withUnit(result)}${remark ? ` (${remark})` : ''}`
}

function verdictText({ verdict, quantity, value }: Result): string {
  switch (verdict.kind) {
    case 'within': return `within the limit, ${limitsText(verdict.limits, quantity)}${verdict.nearLimit ? ', nearer to it than its measurement uncertainty' : ''}`
    case 'outside': return `${verdict.direction} the limit, ${limitsText([verdict.limit], quantity)}${verdict.nearLimit ? ', nearer to it than its measurement uncertainty' : ''}`
    case 'absent': return `limit ${limitsText(verdict.limits, quantity)}`
    case 'cold': return verdict.because.split(':')[0] as string
    case 'no-limit': return value.kind === 'value' ? `no limit: ${verdict.because}` : ''
    case 'not-judged': return value.kind === 'value' ? `not judged: ${verdict.because}` : ''
    default: return ''
  }
}

function limitsText(limits: readonly AppliedLimit[], quantity: string): string {
  const info = quantityInfo(quantity)
  return limits.map(limit => `${limit.bound === 'upper' ? '≤' : '≥'} ${printLimit(limit.value, info.unit === 'µV' ? info.printDecimals : decimalsFor(info, limit.value))}`).join(' and ')
}

function coldWords({ cold, results }: RunAssessment): string {
  if (cold.state !== 'cold' && cold.state !== 'unknown') return ''
  if (cold.because.includes('interpreted all the same')) return `; ${cold.because}`
  return results.some(result => result.verdict.kind === 'cold') ? `; ${cold.because}` : ''
}

function needleText(title: string, known: KnownRun, technique: Technique): string {
  const labels = new Map((technique.ordinals ?? []).map(ordinal => [ordinal.id, ordinal.label]))
  const said = known.run.rows.flatMap(row => Object.entries(row.ordinals ?? {}).map(([id, choice]) => `${labels.get(id) ?? id} ${choice}`))
  return said.length > 0 ? `${title}: ${said.join(', ')}.` : `${title}: nothing recorded.`
}

/** Side differences are told only where a set has a limit; the others also where there is no number, with the reason. */
function comparisonText(comparison: ComparisonAssessment): string | null {
  const isSides = comparison.side === undefined
  const told = comparison.results.filter(result => isSides ? ['within', 'outside', 'absent', 'cold'].includes(result.verdict.kind) : true)
  if (told.length === 0) return null
  const missing = told.filter(result => result.value.kind === 'not-computable')
  const [first] = missing
  if (missing.length === told.length && first?.value.kind === 'not-computable') return `${capital(comparison.title)}: not computable: ${first.value.because.replace(/\b(right|left)\b/, side => side.toUpperCase())}.`
  if (told.every(result => result.verdict.kind === 'within' && !isNear(result))) return `${capital(comparison.title)}: ${told.map(result => `${result.label} ${withUnit(result)}`).join(', ')}, within limits.`
  return `${capital(comparison.title)}: ${told.map(comparedText).join(', ')}.`
}

function comparedText(result: Result): string {
  return result.value.kind === 'not-computable' ? `${result.label} not computable: ${result.value.because}` : valueText(result)
}
