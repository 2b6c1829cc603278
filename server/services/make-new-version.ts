import type { Trx } from '#server/database/connection'
import { namesakesToTellApart } from '#server/database/queries/patients'
import { policyInForce } from '#server/database/queries/policies'
import { questionsOfStudy } from '#server/database/queries/questions'
import { recipientsOfVersion } from '#server/database/queries/recipients'
import { reportVersion } from '#server/database/queries/reports'
import type { Report } from '#server/database/tables/report'
import type { Study as StudyRecord } from '#server/database/tables/study'
import { DomainError } from '#shared/errors'
import { promptFindings } from '#shared/policies/prompt-contact'
import type { Correction } from '#shared/report/corrections'
import { differences, onlyAdds } from '#shared/report/differences'
import { mergeFindings } from '#shared/report/reader-choices'
import { signChecks } from '#shared/report/sign-checks'
import type { newVersionSchema, ReportDraft, ReportSnapshot } from '#shared/schemas/report'
import { mayMove, reportMoves } from '#shared/states'
import type * as z from 'zod'
import { addresseesOf, resolvedChecks, signatureOf } from './build-snapshot'
import { now, type ServiceContext } from './context'
import { storeCorrections } from './correct-values'
import { createTask } from './create-task'
import { moveState } from './move-state'
import { queueDeliveries, withdrawUnsent } from './queue-deliveries'
import { moveStudyIn } from './move-study'
import { reassess } from './reassess-version'
import { refuseOpenChecks } from './save-draft'
import { checkMeaning, proveSigner, type SignedReport } from './sign-report'
import { localDate } from './site-time'
import { storeVersion } from './store-version'
import { intactSnapshot } from './verify-version'

type NewVersion = Omit<z.output<typeof newVersionSchema>, 'corrections'> & { corrections?: Correction[] }

/**
 * Signs a later version beside the earlier ones: added to, amended, corrected or entered in error (HL7 FHIR R4,
 * DiagnosticReport.status; never back to final). It goes to everyone who had an earlier version; what of the earlier
 * one has not left yet is held back.
 *
 * It rests on the values that were frozen in the version before, judged by the limits that were used then. Only a
 * correction changes values: the new version is computed from the corrected ones, and the old one keeps its own.
 * @throws DomainError 'wrong-password', 'wrong-state', 'changed-meanwhile', 'not-valid', 'not-ready'
 */
export async function makeNewVersion(context: ServiceContext, { reportId, ...input }: { reportId: string } & NewVersion): Promise<SignedReport> {
  const place = await context.db.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId').select(['study.siteId', 'study.patientId']).where('report.id', '=', reportId).executeTakeFirst()
  if (!place) throw new DomainError('not-found')
  await proveSigner(context, input.password, { subject: 'report', subjectId: reportId, ...place })
  return await context.db.transaction().execute(trx => signNext(context, trx, reportId, input))
}

async function signNext(context: ServiceContext, trx: Trx, reportId: string, input: NewVersion): Promise<SignedReport> {
  const report = await trx.selectFrom('report').selectAll().where('id', '=', reportId).executeTakeFirstOrThrow()
  const study = await trx.selectFrom('study').selectAll().where('id', '=', report.studyId).executeTakeFirstOrThrow()
  const last = await reportVersion(trx, reportId)
  if (!last || !mayMove(reportMoves, last.status, input.kind)) throw new DomainError('wrong-state', { details: { status: last?.status ?? 'preliminary' } })
  if (input.replaces !== undefined && input.replaces !== last.version) throw new DomainError('changed-meanwhile', { message: `Version ${last.version} was signed meanwhile. Nothing was signed; look at it first.`, details: { version: last.version } })
  const before = intactSnapshot(last)
  const snapshot = await nextSnapshot(context, trx, { before, sha256: last.snapshotSha256, report, study, input })
  const recipients = await recipientsOfVersion(trx, { referralId: study.referralId, reportId }, localDate(context.clock(), snapshot.site.timeZone))
  const version = await storeVersion(context, trx, report, snapshot, study, last.status)
  await withdrawUnsent(context, trx, reportId, `superseded by version ${snapshot.version}`)
  await queueDeliveries(context, trx, { version, snapshot, siteId: study.siteId, patientId: study.patientId }, recipients)
  if (input.kind === 'corrected') await storeCorrections(context, trx, study, before.study, input.corrections ?? [])
  if (input.kind === 'entered-in-error') await closeStudy(context, trx, study, report, input.rightReferralId)
  return { reportId, version: snapshot.version }
}

interface Next { before: ReportSnapshot, sha256: string, report: Report, study: StudyRecord, input: NewVersion }

async function nextSnapshot(context: ServiceContext, trx: Trx, { before, sha256, input, study }: Next): Promise<ReportSnapshot> {
  const draft = draftFor(input, before)
  const reassessed = await reassess(trx, before, draft, input.corrections ?? [])
  const referral = await trx.selectFrom('referral').select(['id', 'physicianId']).where('id', '=', study.referralId).executeTakeFirstOrThrow()
  const next: ReportSnapshot = {
    ...before, ...reassessed, draft, draftedBy: '',
    // A report that went to the wrong one of two namesakes names the right one from now on.
    referral: { ...before.referral, ...await addresseesOf(trx, referral) },
    version: before.version + 1, status: input.kind, reason: input.reason, supersedes: { version: before.version, sha256 },
    signature: await signatureOf(context, trx, input.meaning, now(context), before.site.timeZone),
    changes: [],
  }
  if (input.kind === 'entered-in-error') return next
  checkMeaning(input.meaning, draft.technicalOnly)
  const checks = await checksOf(context, trx, next, study)
  refuseOpenChecks(checks)
  const complete = { ...next, resolvedChecks: resolvedChecks({ checks }) }
  return { ...complete, changes: differences(before, complete) }
}

/** Values are mended by a correction, and nothing else mends them. */
function checkCorrections({ kind, corrections = [] }: NewVersion): void {
  if (corrections.length > 0 && kind !== 'corrected') throw new DomainError('not-valid', { fields: [{ path: 'kind', message: 'A changed value is a correction. Choose "corrected", or put the value back.' }] })
}

/** @throws DomainError 'not-valid' when an addition changes what was signed, or a change says nothing new */
function draftFor(input: NewVersion, before: ReportSnapshot): ReportDraft {
  const { kind, draft } = input
  checkCorrections(input)
  if (kind === 'entered-in-error') return before.draft
  if (!draft) throw new DomainError('not-valid', { fields: [{ path: 'draft', message: 'Write what the new version says.' }] })
  if (kind === 'appended' && !onlyAdds(before.draft, draft)) throw new DomainError('not-valid', { fields: [{ path: 'kind', message: 'An addition leaves what was signed as it is. Choose "amended" or "corrected", or put the old text back.' }] })
  return draft
}

async function checksOf(context: ServiceContext, trx: Trx, next: ReportSnapshot, study: StudyRecord) {
  const others = await namesakesToTellApart(trx, next.patient)
  const today = localDate(context.clock(), next.site.timeZone)
  const recipients = await recipientsOfVersion(trx, { referralId: study.referralId, reportId: '' }, today)
  const { body } = await policyInForce(trx, 'prompt-contact', study.siteId, today)
  return signChecks({
    study: next.study, assessment: next.assessment, draft: next.draft, findings: mergeFindings(next.assessment, next.draft),
    clinicalQuestion: next.referral.clinicalQuestion, language: next.language, recipients,
    namesakes: others.map(other => ({ recordNumber: other.recordNumber, name: `${other.familyName}, ${other.givenName}`, birthDate: other.birthDate })),
    promptFindings: next.draft.technicalOnly ? [] : promptFindings(body, next.assessment, next.draft),
    questions: await questionsOfStudy(trx, study.id),
  })
}

/** Report and values are withdrawn together; where they belong the signer says, or people settle. */
async function closeStudy(context: ServiceContext, trx: Trx, study: StudyRecord, report: Report, rightReferralId: string | undefined): Promise<void> {
  await moveState(context, trx, { subject: 'study', id: study.id, from: 'read', to: 'entered-in-error', reason: `${report.number} was entered in error` })
  if (rightReferralId) await moveStudyIn(context, trx, { id: study.id, toReferralId: rightReferralId, reason: `${report.number} was entered in error` })
  const next = rightReferralId ? 'Its values were moved to the right record: the bench confirms the person and hands them over again, to be read and signed there.' : 'Enter the study in the right record, and see that its physician gets a report.'
  await createTask(context, trx, { kind: 'entered-in-error', subject: 'referral', subjectId: study.referralId, siteId: study.siteId, ownerRole: 'administrator', sentence: `${report.number} was entered in error and withdrawn. See that everyone who had it deletes it. ${next}` })
}
