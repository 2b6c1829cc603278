import { reportWords, type ReportWords } from './words'
import type { RunAssessment } from '../calculations/types'
import { quantities } from '../catalogue/quantities'
import { siteOf } from '../catalogue/nerves'
import type { ReportChange, ReportDraft, ReportSnapshot } from '../schemas/report'
import { absenceLabels, type Absence, type Run, type RunRow } from '../schemas/study'
import { entryIn } from './corrections'

type Texts = Pick<ReportDraft, 'history' | 'examination' | 'correlation' | 'recommendation'> & { impression: string, limitations: string, promptContact: string }

/** What the reader wrote, as texts that can be compared. */
function textsOf(draft: ReportDraft, words: ReportWords): Texts {
  const { history, examination, correlation, recommendation, promptContact } = draft
  return {
    history, examination, correlation, recommendation,
    impression: draft.impression.map(line => [line.words, line.side, line.degree].filter(Boolean).join(' · ')).join('\n'),
    limitations: draft.limitations.join('\n'),
    promptContact: promptContact ? [promptContact.who, promptContact.at, promptContact.means, promptContact.readBack ? words.reading.readBack : '', promptContact.note].filter(Boolean).join(', ') : '',
  }
}

const compared = ['impression', 'correlation', 'limitations', 'recommendation', 'promptContact', 'history', 'examination'] as const satisfies readonly (keyof Texts)[]

/**
 * What a later version says differently, in the order of the report: the reader's texts, then values that were mended,
 * then the findings, sentence by sentence.
 *
 * @example differences(first, second) // => [{ what: 'Impression', before: 'RIGHT …', after: 'LEFT …' }]
 */
export function differences(before: ReportSnapshot, after: ReportSnapshot): ReportChange[] {
  const words = reportWords(after.language)
  const [old, now] = [textsOf(before.draft, words), textsOf(after.draft, words)]
  const texts = compared.filter(key => old[key] !== now[key]).map(key => ({ what: words[key], before: old[key], after: now[key] }))
  const keys = [...new Set([...before.findings, ...after.findings].map(finding => finding.key))]
  const textOf = (snapshot: ReportSnapshot, key: string) => snapshot.findings.find(finding => finding.key === key)?.text ?? ''
  const findings = keys.filter(key => textOf(before, key) !== textOf(after, key)).map(key => ({ what: words.findings, before: textOf(before, key), after: textOf(after, key) }))
  const technical = before.draft.technicalOnly === after.draft.technicalOnly ? [] : [{ what: words.kinds.of, before: kindWords(before, words), after: kindWords(after, words) }]
  return [...technical, ...texts, ...valueChanges(before, after, words), ...findings]
}

const kindWords = ({ draft }: ReportSnapshot, words: ReportWords) => draft.technicalOnly ? words.kinds.technical : words.kinds.full

/**
 * Does the new text keep everything that was signed and only add to it? An addition that alters a word is an amendment
 * or a correction (HL7 FHIR R4: "appended" leaves existing content unchanged).
 */
export function onlyAdds(before: ReportDraft, after: ReportDraft): boolean {
  const words = reportWords('en')
  const [old, now] = [textsOf(before, words), textsOf(after, words)]
  const kept = compared.every(key => now[key].startsWith(old[key]))
  return kept && before.technicalOnly === after.technicalOnly && JSON.stringify(before.editedFindings) === JSON.stringify(after.editedFindings) && JSON.stringify(before.interpretCold) === JSON.stringify(after.interpretCold) && before.leaveOutEntrapmentSites === after.leaveOutEntrapmentSites
}

const titleOf = (runs: readonly RunAssessment[], run: Run, words: ReportWords) => words.say(runs.find(each => each.runId === run.id)?.title ?? run.technique)

/** Runs that went, sides that changed, and cells, each with what stood there. */
function valueChanges(before: ReportSnapshot, after: ReportSnapshot, words: ReportWords): ReportChange[] {
  return before.study.runs.flatMap((old): ReportChange[] => {
    const now = after.study.runs.find(run => run.id === old.id)
    const title = titleOf(before.assessment.runs, old, words)
    if (!now) return [{ what: words.kinds.run, before: title, after: '' }]
    const side = now.side === old.side ? [] : [{ what: words.kinds.side, before: title, after: titleOf(after.assessment.runs, now, words) }]
    return [...side, ...old.rows.flatMap(row => cellChanges(now, titleOf(after.assessment.runs, now, words), row, now.rows.find(each => each.id === row.id), words))]
  })
}

const fieldsOf = (row: RunRow | undefined) => row ? [...Object.keys(row.values), ...row.series ? ['series'] : [], ...Object.keys(row.ordinals ?? {}).map(id => `ordinal:${id}`)] : []

function cellChanges(run: Run, title: string, old: RunRow, now: RunRow | undefined, words: ReportWords): ReportChange[] {
  const fields = [...new Set([...fieldsOf(old), ...fieldsOf(now)])]
  return fields.filter(field => JSON.stringify(entryIn(old, field)) !== JSON.stringify(entryIn(now, field))).map(field => ({
    what: `${title}, ${words.say(siteOf(run.technique, old.site)?.label ?? old.site)}, ${words.say(labelOf(field))}`, before: entryWords(field, entryIn(old, field), words), after: entryWords(field, entryIn(now, field), words),
  }))
}

const quantityIn = (field: string) => quantities[field as keyof typeof quantities] as { label: string, unit: string } | undefined
const labelOf = (field: string) => quantityIn(field)?.label ?? field.replace('ordinal:', '')

/** As typed: a correction shows what was changed, not how it is printed. */
function entryWords(field: string, entry: unknown, words: ReportWords): string {
  if (entry === null) return ''
  if (Array.isArray(entry)) return entry.map(each => entryWords('', each, words)).join(', ')
  if (typeof entry === 'number') return [String(entry), quantityIn(field)?.unit].filter(Boolean).join(' ')
  return words.say(absenceLabels[entry as Absence] ?? String(entry))
}
