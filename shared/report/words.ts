import type { ReportSnapshot } from '../schemas/report'

/**
 * The fixed words of a report in one language. A further language is a further entry of `languages`.
 * Words of the calculation library (labels, findings) are frozen in the snapshot and are not translated here.
 */
const en = {
  title: 'Report of nerve conduction studies',
  version: (version: number, status: string) => `version ${version} · ${status}`,
  status: { 'final': 'final', 'appended': 'appended', 'amended': 'amended', 'corrected': 'corrected', 'entered-in-error': 'entered in error' } satisfies Record<ReportSnapshot['status'], string>,
  preliminary: 'PRELIMINARY',
  demonstration: 'DEMONSTRATION',
  preliminaryNote: 'Preliminary: not signed. Do not act on this print.',
  demonstrationNote: 'Demonstration: the people, clinics and numbers are invented.',
  page: (page: number, pages: number) => `page ${page} of ${pages}`,
  identity: { patient: 'Patient', born: 'Born', record: 'Record', studied: 'Studied', referredBy: 'Referred by', copies: 'Copies to', asked: 'Asked', side: 'Side asked', referral: 'Referral', received: 'received', study: 'Study', site: 'Laboratory', cautions: 'Cautions' },
  sides: { right: 'RIGHT', left: 'LEFT', both: 'RIGHT and LEFT', midline: 'midline' },
  sex: { female: 'woman', male: 'man' },
  notRecorded: 'not recorded',
  technicalOnly: 'Technical report: it holds no clinical interpretation.',
  impression: 'Impression',
  correlation: 'Clinical correlation',
  limitations: 'Limitations',
  recommendation: 'Recommendation',
  promptContact: 'Prompt contact',
  history: 'History',
  examination: 'Examination',
  historyAsReferred: 'As referred',
  byReader: 'By the reader',
  findings: 'Findings',
  noFindings: 'No values were recorded.',
  motor: 'Motor',
  sensory: 'Sensory',
  mixed: 'Mixed nerve',
  late: 'F-waves',
  hReflex: 'H-reflexes',
  repetitive: 'Repetitive stimulation',
  blink: 'Blink reflex',
  needle: 'Needle examination',
  derived: 'Further computed values outside or near their limits',
  comparisons: 'Comparisons',
  travel: 'Travel plots',
  columns: { nerve: 'nerve, recorded from', site: 'stimulated at', bar: 'first limit', limits: 'limits', value: 'value', comparison: 'comparison', computed: 'computed value' },
  recalled: 'recalled, not verified',
  allRecalled: 'Every limit of this table is recalled, not verified against its publication.',
  someRecalled: (mark: string) => `${mark}: recalled, not verified against its publication.`,
  noLimits: 'no limit',
  notJudged: 'not judged',
  cold: 'cold, not interpretable',
  superseded: 'cold, repeated warm',
  singleResponses: 'Single responses',
  notExamined: 'not examined',
  notComputable: 'not computable',
  technique: 'Technique',
  temperatures: 'Temperatures',
  limits: 'Limits',
  legend: (above: string, below: string) => `${above} above, ${below} below the limit or absent, ≈ closer to the limit than its uncertainty, * recorded cold. Bar: the shaded part is within the first limit named beside it.`,
  questionsKept: 'Questions answered before signing',
  keptAtBench: 'Kept at the bench',
  resolvedByReader: 'Answered by the reader',
  interpretedCold: 'Interpreted although cold',
  signature: 'Signature',
  signedBy: 'Signed',
  draftedBy: 'Drafted by',
  fingerprint: 'Fingerprint',
  auditHead: 'audit trail at signing',
  notSigned: 'Not signed.',
  disclaimer: 'Note',
  versions: 'Versions',
  changes: (version: number) => `What changed since version ${version}`,
  changeReason: 'Reason',
  before: 'before',
  now: 'now',
  supersedes: (version: number) => `This version supersedes version ${version}.`,
  withdrawn: 'This report was entered in error and is withdrawn. Do not act on any version of it.',
  none: 'none',
}

export type ReportWords = typeof en
const languages: Record<string, ReportWords> = { en }

/** Languages that a report can be written in, English first. */
export const reportLanguages: readonly string[] = Object.keys(languages)

/** The words of a language; English where there are none. */
export const reportWords = (language: string): ReportWords => languages[language] ?? en
