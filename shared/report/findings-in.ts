import { draftFindings } from '../calculations/findings'
import { recordedRun } from '../calculations/study-context'
import type { Assessment } from '../calculations/types'
import type { Study } from '../schemas/study'
import { reportWords } from './words'

/**
 * The assessment with its drafted sentences in the language of the report. Keys and fingerprints stay those of the numbers,
 * so that an edited sentence is marked when its row changes, in whatever language it stands.
 *
 * @example inLanguage('de', study, assessment).findings[0]?.text // => 'RECHTS N. medianus motorisch, …'
 */
export function inLanguage(language: string, study: Study, assessment: Assessment): Assessment {
  const words = reportWords(language)
  if (words.language === 'en') return assessment
  const known = new Map(study.runs.map(run => [run.id, recordedRun(run)]))
  const texts = new Map(draftFindings({ known }, assessment.runs, assessment.comparisons, words.drafted).map(finding => [finding.key, finding.text]))
  return { ...assessment, findings: assessment.findings.map(finding => ({ ...finding, text: texts.get(finding.key) ?? finding.text })) }
}
