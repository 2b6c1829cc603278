import { referenceTable } from '#reference-tables/index'
import { canonicalJson } from '#server/services/canonical-json'
import type { StudySummary } from '#server/services/hand-over-study'
import { usualSettings } from '#server/services/lay-out-runs'
import { assessStudy } from '#shared/calculations/assess-study'
import type { Policy } from '#shared/calculations/types'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { LimitSex, Side } from '#shared/schemas/common'
import { meanings, reportDraftSchema, SNAPSHOT_FORMAT, type ReportDraft, type ReportSnapshot } from '#shared/schemas/report'
import { studySchema, type Study } from '#shared/schemas/study'
import { makeRows, pictures, type ClinicalPicture } from '../demo/cases'
import type { Random } from '../demo/random'
import type { Place, Setting } from './setting'

/**
 * A finished study of one run that many invented patients share: its values are made and judged once. What differs
 * stands as a word between double signs and is put in for each patient.
 */
export interface Pattern {
  place: Place
  picture: ClinicalPicture
  side: Side
  technique: string
  settingsJson: string
  row: { site: string, values: [field: string, entryJson: string][] }
  question: string
  symptoms: string
  onset: string
  examination: string
  person: { sex: LimitSex, ageYears: number, heightCm: number, weightKg: number }
  celsius: number
  draftJson: string
  summaryJson: string
  /** Canonical JSON of the signed copy, with the gaps. */
  snapshot: string
}

/** One run of one row for each picture: a filled study is small, so that a hundred thousand fit. */
const studied: Record<string, string> = { 'median-wrist': 'median-sensory-d2', 'normal-arm': 'median-sensory-d2', 'ulnar-elbow': 'ulnar-sensory-d5', 'fibular-head': 'superficial-fibular' }
export const studiedPictures = pictures.filter(picture => picture.id in studied)

export type Gap = 'patientId' | 'recordNumber' | 'familyName' | 'givenName' | 'birthDate' | 'referralNumber' | 'receivedAt' | 'physician' | 'practice' | 'town' | 'studyId' | 'studyNumber' | 'studyDate' | 'startedAt' | 'run' | 'row' | 'temperature' | 'temperatureAt' | 'reportNumber' | 'signedAt'
const gap = (name: Gap) => `@@${name}@@`

/** @example fillGaps('{"number":"@@reportNumber@@"}', values) // => '{"number":"REP-2026-000001"}' */
export function fillGaps(text: string, values: Record<Gap, string>): string {
  return text.replace(/@@(\w+)@@/g, (_, name: Gap) => JSON.stringify(values[name]).slice(1, -1))
}

/** Any day will do: what is computed depends on the age in years only. */
const standInDay = '2026-03-02'

function madeStudy({ technique, side, rows, person, celsius, segment }: Pick<Pattern, 'technique' | 'side' | 'person' | 'celsius'> & { rows: ReturnType<typeof makeRows>, segment: 'hand' | 'foot' }): Study {
  const known = techniqueOf(technique)!
  return studySchema.parse({
    id: gap('studyId'), studyDate: standInDay, patient: { birthDate: `${2026 - person.ageYears}-01-15`, sexForLimits: person.sex }, heightCm: person.heightCm, weightKg: person.weightKg, referralSide: side,
    temperatures: [{ id: gap('temperature'), segment, side, celsius, method: 'skin probe', warmed: false }],
    runs: [{ id: gap('run'), technique, side, ...usualSettings(known), rows: Object.entries(rows ?? {}).map(([site, values]) => ({ id: gap('row'), site, values })) }],
  })
}

function madeDraft(picture: ClinicalPicture, side: Side, abnormal: boolean, random: Random): ReportDraft {
  const [line] = abnormal ? picture.impression(side) : [{ words: 'No abnormality of the nerve studied that answers the question.', nerve: null, side: null, abnormal: false }]
  return reportDraftSchema.parse({
    impression: [{ id: 'line-1', ...line }],
    correlation: random.pick(['Fits the history.', 'Explains the symptoms in part.', 'To be read with the clinical examination.']),
    limitations: ['One nerve was studied.'],
  })
}

export function makePattern(setting: Setting, place: Place, policy: Policy, random: Random): Pattern {
  const picture = random.pick(studiedPictures)
  const technique = studied[picture.id]!
  const side = random.pick(['right', 'left'] as const)
  const sex = random.pick(['female', 'male'] as const)
  const heightCm = Math.round(random.normal(sex === 'female' ? 164 : 177, 6))
  const person = { sex, ageYears: random.whole(22, 78), heightCm, weightKg: Math.round(random.normal(27, 4) * (heightCm / 100) ** 2) }
  const segment = picture.limb === 'foot' ? 'foot' : 'hand'
  const celsius = Number(random.normal(segment === 'hand' ? 33.4 : 32.2, 0.3).toFixed(1))
  const study = madeStudy({ technique, side, rows: makeRows(technique, picture.severity(technique, random), random, 'wrist'), person, celsius, segment })
  const assessment = assessStudy(study, policy.adopted.flatMap(({ setId, version }) => referenceTable(setId, version) ?? []), policy)
  const row = study.runs[0]!.rows[0]!
  const draft = madeDraft(picture, side, assessment.flagged.length > 0, random)
  const words = { question: random.pick(picture.question), symptoms: random.pick(picture.symptoms), onset: `${random.whole(2, 30)} months ago`, examination: random.pick(picture.examination) }
  const summary: StudySummary = { flagged: assessment.flagged.length, runs: 1, calculationVersion: assessment.calculationVersion, openChecks: 0, checks: {} }
  return {
    place, picture, side, technique, ...words, person, celsius,
    settingsJson: JSON.stringify(usualSettings(techniqueOf(technique)!)),
    row: { site: row.site, values: Object.entries(row.values).map(([field, entry]) => [field, JSON.stringify(entry)]) },
    draftJson: JSON.stringify(draft), summaryJson: JSON.stringify(summary),
    snapshot: canonicalJson(snapshotOf(setting, { place, picture, side, technique, ...words, person, policy, study, assessment, draft })),
  }
}

type Judged = Pick<Pattern, 'place' | 'picture' | 'side' | 'technique' | 'question' | 'symptoms' | 'onset' | 'examination' | 'person'> & Pick<ReportSnapshot, 'policy' | 'study' | 'assessment' | 'draft'>

function snapshotOf({ organisation }: Setting, { place: { site, reader, technologist }, picture, side, technique, person, policy, study, assessment, draft, question, ...words }: Judged): ReportSnapshot {
  return {
    format: SNAPSHOT_FORMAT, demonstration: true, number: gap('reportNumber'), version: 1, status: 'final', reason: '', supersedes: null,
    organisation: { name: organisation.name, disclaimer: organisation.disclaimer, paperSize: organisation.paperSize, timeZone: organisation.timeZone },
    site: { name: site.name, town: site.town, address: site.address, phone: site.phone, timeZone: site.timeZone },
    language: 'en',
    patient: { id: gap('patientId'), recordNumber: gap('recordNumber'), familyName: gap('familyName'), givenName: gap('givenName'), birthDate: gap('birthDate'), sexForLimits: person.sex },
    referral: { number: gap('referralNumber'), receivedAt: gap('receivedAt'), clinicalQuestion: question, side, symptoms: words.symptoms, onset: words.onset, examination: words.examination, provisionalDiagnosis: picture.diagnosis, urgency: 'routine', cautions: [], physician: { name: gap('physician'), practiceName: gap('practice'), town: gap('town') }, copies: [] },
    study: { ...study, studyDate: gap('studyDate'), patient: { ...study.patient, birthDate: gap('birthDate') }, temperatures: study.temperatures.map(one => ({ ...one, at: gap('temperatureAt') })) },
    studyNumber: gap('studyNumber'), startedAt: gap('startedAt'), technologist: [technologist.printedName || technologist.name, technologist.credentials].filter(Boolean).join(', '), handOverNote: '', needleExamination: '',
    policy, assessment, techniques: [techniqueOf(technique)!],
    findings: assessment.findings.map(({ key, runIds, text }) => ({ key, runIds, text, edited: false })),
    draft, resolvedChecks: [], changes: [], draftedBy: '',
    signature: { userId: reader.id, name: reader.printedName || reader.name, credentials: reader.credentials, meaning: meanings[0], at: gap('signedAt'), timeZone: site.timeZone },
  }
}
