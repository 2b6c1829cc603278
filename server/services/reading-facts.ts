import type { Database } from '#server/database/connection'
import { earlierStudies, type EarlierReport } from '#server/database/queries/earlier-studies'
import { policyInForce } from '#server/database/queries/policies'
import { namesakesToTellApart } from '#server/database/queries/patients'
import { questionsOfStudy } from '#server/database/queries/questions'
import { recipientsOfReferral, recipientsOfVersion, type Recipient } from '#server/database/queries/recipients'
import { referralRecord } from '#server/database/queries/referrals'
import { reportOfStudy } from '#server/database/queries/reports'
import type { Patient } from '#server/database/tables/patient'
import type { Referral } from '#server/database/tables/referral'
import type { Report } from '#server/database/tables/report'
import type { Site } from '#server/database/tables/site'
import { assessStudy } from '#shared/calculations/assess-study'
import { compareWithEarlier } from '#shared/calculations/compare-with-earlier'
import type { Assessment, Policy } from '#shared/calculations/types'
import { DomainError } from '#shared/errors'
import { inLanguage } from '#shared/report/findings-in'
import { suggestPhrases } from '#shared/policies/phrases'
import { promptFindings } from '#shared/policies/prompt-contact'
import { mergeFindings, withReaderChoices } from '#shared/report/reader-choices'
import { signChecks } from '#shared/report/sign-checks'
import { reportDraftSchema, type ReadingView, type ReportDraft, type SignCheck } from '#shared/schemas/report'
import type { Study } from '#shared/schemas/study'
import { assessStoredStudy, type AssessedStudy } from './assess-stored-study'
import { now, type ServiceContext } from './context'
import { printedNameOf } from './printed-name'
import { localDate } from './site-time'

/** Everything the reading page shows and a signature freezes, read together so that it fits together. */
export interface ReadingFacts {
  assessed: AssessedStudy
  report: Report | undefined
  referral: Referral
  patient: Patient
  site: Site
  draft: ReportDraft
  /** Study, policy and assessment with the reader's own choices (cold runs interpreted, entrapment sites left out). */
  study: Study
  policy: Policy
  assessment: Assessment
  findings: ReadingView['findings']
  recipients: Recipient[]
  namesakes: ReadingView['namesakes']
  checks: SignCheck[]
  /** Signed studies of the same person before this one. */
  earlier: EarlierReport[]
  phrases: ReadingView['phrases']
  promptContact: ReadingView['promptContact']
}

/** The draft as stored; a blank one where nothing was written yet. */
export function draftOf(report: Report | undefined): ReportDraft {
  return reportDraftSchema.parse(report ? JSON.parse(report.draftJson) : {})
}

async function recipientsOf(db: Database, referralId: string, report: Report | undefined, today: string): Promise<Recipient[]> {
  return report ? await recipientsOfVersion(db, { referralId, reportId: report.id }, today) : await recipientsOfReferral(db, referralId, today)
}

/** What the organisation says of its own: phrases that fit, and findings that call for prompt contact. */
async function ownWords(db: Database, { siteId, today, assessment, draft, language }: { siteId: string, today: string, assessment: Assessment, draft: ReportDraft, language: string }): Promise<Pick<ReadingFacts, 'phrases' | 'promptContact'>> {
  const phrases = await policyInForce(db, 'phrases', siteId, today)
  const { body } = await policyInForce(db, 'prompt-contact', siteId, today)
  return {
    phrases: suggestPhrases(phrases.body, phrases.version, assessment, language),
    promptContact: { list: body.findings.map(finding => finding.label), found: draft.technicalOnly ? [] : promptFindings(body, assessment, draft) },
  }
}

/**
 * @param db the transaction where something is decided on it, else the database
 * @throws DomainError 'not-found'
 */
export async function readingFacts(context: ServiceContext, db: Database, studyId: string): Promise<ReadingFacts> {
  const assessed = await assessStoredStudy({ db }, studyId)
  const { record } = assessed
  const [report, referral, patient, site] = await Promise.all([
    reportOfStudy(db, studyId),
    referralRecord(db, record.referralId),
    db.selectFrom('patient').selectAll().where('id', '=', record.patientId).executeTakeFirst(),
    db.selectFrom('site').selectAll().where('id', '=', record.siteId).executeTakeFirst(),
  ])
  if (!referral || !patient || !site) throw new DomainError('not-found')
  const draft = draftOf(report)
  const chosen = withReaderChoices(assessed, draft)
  const judged = draft.interpretCold.length > 0 || draft.leaveOutEntrapmentSites ? assessStudy(chosen.study, assessed.tables, chosen.policy) : assessed.assessment
  const earlier = await earlierStudies(db, { studyId, patientId: record.patientId, studyDate: record.studyDate })
  const technologist = await printedNameOf(db, record.technologistId)
  const assessment = { ...inLanguage(referral.reportLanguage, chosen.study, judged), changes: compareWithEarlier(judged, earlier, { siteName: site.name, technologist }) }
  const findings = mergeFindings(assessment, draft)
  const today = localDate(new Date(now(context)), site.timeZone)
  const recipients = await recipientsOf(db, record.referralId, report, today)
  const own = await ownWords(db, { siteId: site.id, today, assessment, draft, language: referral.reportLanguage })
  const others = await namesakesToTellApart(db, patient)
  const namesakes = others.map(other => ({ recordNumber: other.recordNumber, name: `${other.familyName}, ${other.givenName}`, birthDate: other.birthDate }))
  const checks = signChecks({ study: chosen.study, assessment, draft, findings, clinicalQuestion: referral.clinicalQuestion, language: referral.reportLanguage, recipients, namesakes, promptFindings: own.promptContact.found, questions: await questionsOfStudy(db, studyId) })
  return { assessed, report, referral, patient, site, draft, ...chosen, assessment, findings, recipients, namesakes, checks, earlier, ...own }
}
