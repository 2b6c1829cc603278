import { fingerprint } from '../calculations/fingerprint'
import type { Assessment, RunAssessment } from '../calculations/types'
import { techniqueOf } from '../catalogue/nerves'
import type { Side } from '../schemas/common'
import type { ImpressionLine, ReadingView, ReportDraft, SignCheck } from '../schemas/report'
import type { QuestionView } from '../schemas/question'
import type { Study } from '../schemas/study'
import { formatDay } from './dates'
import { isNerveOrBranch, sideClaims, sidesInWords, wordsContradictField, type SideClaim } from './side-claims'

export interface SignCheckInput {
  study: Study
  assessment: Assessment
  draft: ReportDraft
  findings: ReadingView['findings']
  clinicalQuestion: string
  /** The report's: its words are read for sides. */
  language: string
  recipients: { name: string, reachable: boolean, because: string }[]
  namesakes: ReadingView['namesakes']
  /** What of this study stands on the organisation's list of findings that call for prompt contact. */
  promptFindings?: readonly { id: string, label: string, because: string }[]
  /** What the bench asked the readers. */
  questions: readonly AskedQuestion[]
}
export type AskedQuestion = Pick<QuestionView, 'id' | 'question' | 'state' | 'runId' | 'answer' | 'closedBy'>

type Found = Omit<SignCheck, 'resolvedBecause'>
/** A key is stored with its answer; the column has room for 200 signs. */
const stop = (key: string, sentence: string, rest: Partial<Found> = {}): Found => ({ key: key.slice(0, 200), strength: 'stop', sentence, answerable: false, ...rest })
const check = (key: string, sentence: string, rest: Partial<Found> = {}): Found => ({ key: key.slice(0, 200), strength: 'check', sentence, answerable: true, ...rest })

/** What must be there whatever the study says. */
function missing({ draft, clinicalQuestion }: SignCheckInput): Found[] {
  const interpreted = !draft.technicalOnly
  return [
    ...interpreted && !draft.impression.some(line => line.words.trim()) ? [stop('impression', 'Write the impression.')] : [],
    ...interpreted && !draft.correlation.trim() ? [stop('correlation', 'Write how this fits the clinical question.')] : [],
    ...draft.limitations.length === 0 ? [stop('limitations', 'Enter at least one limitation, or "none identified".')] : [],
    ...clinicalQuestion.trim() ? [] : [stop('question', 'The referral has no clinical question. Return the study, or complete the referral.')],
  ]
}

/** Draft sentences that were edited and whose numbers changed since. */
function unreviewed({ findings }: SignCheckInput): Found[] {
  return findings.filter(finding => finding.needsReview).map(finding =>
    stop(`review/${finding.key}`, `An edited sentence rests on numbers that changed: "${finding.text}". Read it again.`, finding.runIds[0] ? { runId: finding.runIds[0] } : {}))
}

interface Flag { side: Side, nerve: string }

/** Side and nerve of everything that is flagged, comparisons included. */
export function flagsOf({ assessment }: Pick<SignCheckInput, 'assessment'>): Flag[] {
  const nerveOf = (technique: string) => techniqueOf(technique)?.nerve ?? technique
  const ofRuns = assessment.runs.filter(run => run.results.some(result => result.flagged)).map(run => ({ side: run.side, nerve: nerveOf(run.technique) }))
  const ofComparisons = assessment.comparisons.flatMap(comparison => comparison.results.filter(result => result.flagged).flatMap((result) => {
    const runs = assessment.runs.filter(run => comparison.runIds.includes(run.runId))
    return runs.filter(run => !(result.side ?? comparison.side) || run.side === (result.side ?? comparison.side)).map(run => ({ side: run.side, nerve: nerveOf(run.technique) }))
  }))
  return [...ofRuns, ...ofComparisons]
}

const supports = (flag: Flag, claim: Pick<SideClaim, 'side' | 'nerves'>) =>
  flag.side === claim.side && (claim.nerves.length === 0 || claim.nerves.some(nerve => isNerveOrBranch(flag.nerve, nerve)))
const otherSide = (side: Side): Side => side === 'right' ? 'left' : 'right'
const sideName = (side: Side) => side.toUpperCase()

/** Why a claim does not fit the rows; '' when it does. */
function complaint(claim: SideClaim, flags: Flag[]): string {
  const what = claim.nerves.length > 0 ? `${claim.nerves.join(', ')} ` : ''
  const here = flags.some(flag => supports(flag, claim))
  const there = flags.some(flag => supports(flag, { ...claim, side: otherSide(claim.side) }))
  if (claim.abnormal && !here) return `"${claim.words}" speaks of the ${sideName(claim.side)}: no ${what}row is flagged on the ${sideName(claim.side)}${there ? `, but on the ${sideName(otherSide(claim.side))} there is` : ''}.`
  if (!claim.abnormal && claim.nerves.length > 0 && here && !there) return `"${claim.words}" says that nothing is found on the ${sideName(claim.side)}, where a ${what}row is flagged.`
  return ''
}

/**
 * The wrong-side rule: a line that calls a side abnormal needs a flagged row of that nerve on that side. Limitations are
 * not looked at. Each complaint is resolved with a reason, which is printed.
 */
function wrongSides(input: SignCheckInput): Found[] {
  const flags = flagsOf(input)
  return input.draft.technicalOnly ? [] : input.draft.impression.flatMap(line => lineSides(line, flags, input.language))
}

function lineSides(line: ImpressionLine, flags: Flag[], language: string): Found[] {
  const claims = sideClaims(line, language)
  const found = claims.flatMap((claim) => {
    const sentence = complaint(claim, flags)
    return sentence ? [stop(`side/${line.id}/${claim.side}/${claim.abnormal ? 'abnormal' : 'normal'}/${claim.words.slice(0, 80)}`, sentence, { answerable: true })] : []
  })
  const contradicts = wordsContradictField(line, language)
  return contradicts ? [...found, stop(`side-field/${line.id}/${line.side}/${line.words.slice(0, 80)}`, `The field beside "${line.words}" says ${line.side}; the words say another side.`)] : found
}

/** A recommendation or correlation that names the side without any flag while the other side has some. */
function sidesElsewhere(input: SignCheckInput): Found[] {
  const flags = flagsOf(input)
  const texts = [['recommendation', input.draft.recommendation], ['correlation', input.draft.correlation]] as const
  return texts.flatMap(([name, text]) => {
    const sides = sidesInWords(text, input.language)
    const [side] = sides
    const wrong = sides.length === 1 && side && !flags.some(flag => flag.side === side) && flags.length > 0
    return wrong ? [check(`side-text/${name}/${text.slice(0, 80)}`, `The ${name} speaks of the ${sideName(side)}, where nothing is flagged; the ${sideName(otherSide(side))} has flags.`)] : []
  })
}

/** The numbers of these runs as they stand: an answer holds for them, not for what is corrected later. */
const numbersOf = (runs: readonly RunAssessment[]) => fingerprint(runs.flatMap(run => run.results.filter(result => result.typed).map(result => `${result.key}=${result.print}`)).join(';'))

/** Cold runs that were not repeated warm, and limbs without a temperature, which count as cold. */
function temperatures({ assessment }: SignCheckInput): Found[] {
  const open = assessment.runs.filter(run => !run.supersededBy && !run.notDone && run.results.length > 0)
  const cold = open.filter(run => run.cold.state === 'cold' && run.results.some(result => result.verdict.kind === 'cold'))
  const unknown = open.filter(run => run.cold.state === 'unknown')
  return [
    ...cold.map(run => check(`cold/${run.runId}`, `${run.title} was recorded cold${run.cold.celsius === null ? '' : ` (${run.cold.celsius.toFixed(1)} °C)`} and not repeated warm.`, { runId: run.runId, about: numbersOf([run]) })),
    ...unknown.length > 0 ? [check('temperature-missing', `No temperature was recorded for: ${unknown.map(run => run.title).join('; ')}. It counts as cold.`, { about: numbersOf(unknown) })] : [],
  ]
}

/** What the program questioned: kept with a reason at the bench, or still open. */
function questions({ assessment, study }: SignCheckInput): Found[] {
  const kept = new Set(study.keptChecks.filter(item => item.sentence === undefined).map(item => item.key))
  return assessment.remarks.flatMap((remark): Found[] => {
    const run = assessment.runs.filter(one => one.runId === remark.runId)
    const rest = remark.runId ? { runId: remark.runId, about: fingerprint(remark.sentence + numbersOf(run)) } : { about: fingerprint(remark.sentence) }
    if (remark.strength === 'stop') return [stop(`remark/${remark.key}`, `${remark.sentence} Return the study to the bench.`, rest)]
    if (remark.strength !== 'check') return []
    return remark.kept !== undefined || kept.has(remark.key) ? [{ key: `kept/${remark.key}`, strength: 'ok', sentence: `Kept at the bench: ${remark.sentence}`, answerable: false, ...rest }] : [check(`remark/${remark.key}`, remark.sentence, rest)]
  })
}

const isJudged = (kind: string) => kind === 'within' || kind === 'outside' || kind === 'absent' || kind === 'cold'

/** Runs to which no limit at all was applied, one question for each reason. */
function withoutLimits({ assessment }: SignCheckInput): Found[] {
  const reasons = new Map<string, string[]>()
  for (const run of assessment.runs) {
    if (run.supersededBy || run.notDone || run.results.some(result => isJudged(result.verdict.kind))) continue
    const because = run.results.flatMap(({ verdict }) => verdict.kind === 'no-limit' ? [`no limit: ${verdict.because}`] : verdict.kind === 'not-judged' ? [`not judged: ${verdict.because}`] : [])[0]
    if (because) reasons.set(because, [...reasons.get(because) ?? [], run.title])
  }
  return [...reasons].map(([because, titles]) => check(`no-limit/${because}`, `No limit was applied to ${titles.join('; ')} (${because}).`))
}

/** One value outside among many is expected in health now and then (multiple comparisons). */
function isolated({ assessment, draft }: SignCheckInput): Found[] {
  if (draft.technicalOnly || assessment.flagged.length !== 1) return []
  const run = assessment.runs.find(candidate => candidate.results.some(result => result.key === assessment.flagged[0]))
  const result = run?.results.find(one => one.key === assessment.flagged[0])
  const about = fingerprint(`${assessment.flagged[0]}=${result?.print ?? ''}`)
  return [check('isolated', `A single value is outside its limit. ${assessment.chance.sentence} Say what it means here.`, { about, ...(run ? { runId: run.runId } : {}) })]
}

/** A finding of the organisation's list: the record of who was told answers it, or a reason why nobody was. */
function promptContact({ draft, promptFindings = [] }: SignCheckInput): Found[] {
  const contact = draft.promptContact
  const complete = contact !== null && [contact.who, contact.at, contact.means].every(text => text.trim() !== '')
  const incomplete = contact !== null && !complete ? [stop('prompt-contact', 'Prompt contact: enter who was told, when and by which means, or take the record away.')] : []
  const asked = promptFindings.map(({ id, label, because }): Found => complete
    ? { key: `prompt/${id}`, strength: 'ok', sentence: `Prompt contact is recorded (${label}).`, answerable: false }
    : check(`prompt/${id}`, `"${label}" calls for prompt contact here (${because}). Record who was told, or say why nobody was.`))
  return [...incomplete, ...asked]
}

function people({ namesakes, recipients }: SignCheckInput): Found[] {
  return [
    ...namesakes.map(other => check(`namesake/${other.recordNumber}`, `There is another ${other.name}, born ${formatDay(other.birthDate)}, ${other.recordNumber}. Say how you told them apart.`)),
    ...recipients.length === 0 ? [check('no-recipient', 'The referral names no physician: nobody will receive this report.')] : [],
    ...recipients.filter(person => !person.reachable).map(person => check(`recipient/${person.name}`, `The report cannot be mailed to ${person.name}: ${person.because}. It becomes a task to deliver it another way.`)),
  ]
}

/** A question of the bench that nobody answered stands in the way; an answered one is shown with its answer. */
function askedByBench({ questions }: SignCheckInput): Found[] {
  return questions.flatMap(({ id, question, state, runId, answer, closedBy }): Found[] => {
    const rest = runId ? { runId } : {}
    if (state === 'open') return [check(`question/${id}`, `The bench asked, and nobody has answered: "${question}"`, rest)]
    return state === 'answered' ? [{ key: `answered/${id}`, strength: 'ok', sentence: `The bench asked: "${question}" ${closedBy} answered${answer ? `: "${answer}"` : ' with a run to add.'}`, answerable: false, ...rest }] : []
  })
}

/** Questions about people rest on the directory and the register, a question of the bench on its own words, not on what was measured. */
const aboutPeople = /^(?:namesake|recipient|no-recipient|question\/)/

/**
 * What an answer was given to: the words of the question and the numbers it is about. For a side, everything that is
 * flagged; else the results of the runs that the question names.
 */
function basisOf({ key, sentence, runId }: Found, { assessment }: SignCheckInput): string | undefined {
  if (aboutPeople.test(key)) return undefined
  const named = assessment.runs.filter(run => run.runId === runId || sentence.includes(run.title))
  const numbers = named.flatMap(run => run.results.map(result => `${result.key}=${result.print}`))
  return fingerprint([sentence, ...numbers, ...assessment.flagged].join('\n'))
}

function answered(plain: Found, input: SignCheckInput): SignCheck {
  const { draft, assessment, study } = input
  const about = plain.about ?? basisOf(plain, input)
  const found = { ...plain, ...about && { about } }
  const runId = found.key.startsWith('cold/') ? found.runId : undefined
  const cold = draft.interpretCold.find(item => item.runId === runId)?.reason
  const kept = found.key.startsWith('kept/') ? study.keptChecks.find(item => `kept/${item.key}` === found.key)?.reason ?? assessment.remarks.find(remark => `kept/${remark.key}` === found.key)?.kept : undefined
  const reason = kept ?? cold ?? (found.answerable ? draft.resolved.find(item => item.key === found.key && item.about === found.about)?.reason : undefined)
  return reason ? { ...found, resolvedBecause: reason } : found
}

/**
 * The check before signing. A stop without an answer, or a question without one, refuses the signature; what was
 * answered is printed with its reason.
 *
 * @example signChecks(input).filter(isOpen) // => what still stands in the way
 */
export function signChecks(input: SignCheckInput): SignCheck[] {
  const found = [missing, unreviewed, wrongSides, sidesElsewhere, temperatures, questions, withoutLimits, isolated, promptContact, people, askedByBench].flatMap(part => part(input))
  const once = found.filter((item, index) => found.findIndex(other => other.key === item.key) === index)
  return once.map(item => answered(item, input))
}

/** Does it still stand in the way of a signature? */
export const isOpen = (item: SignCheck): boolean => item.strength !== 'ok' && !item.resolvedBecause
