import { referenceTable } from '#reference-tables/index'
import type { Trx } from '#server/database/connection'
import { namesakesToTellApart } from '#server/database/queries/patients'
import { policyInForce } from '#server/database/queries/policies'
import { recipientsOfVersion } from '#server/database/queries/recipients'
import { reportVersion } from '#server/database/queries/reports'
import type { Report } from '#server/database/tables/report'
import type { Study as StudyRecord } from '#server/database/tables/study'
import { assessStudy } from '#shared/calculations/assess-study'
import { DomainError } from '#shared/errors'
import { promptFindings } from '#shared/policies/prompt-contact'
import { differences, onlyAdds } from '#shared/report/differences'
import { signChecks } from '#shared/report/sign-checks'
import type { newVersionSchema, ReportDraft, ReportSnapshot } from '#shared/schemas/report'
import { mayMove, reportMoves } from '#shared/states'
import type * as z from 'zod'
import { resolvedChecks, signatureOf } from './build-snapshot'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { moveState } from './move-state'
import { queueDeliveries, withdrawUnsent } from './queue-deliveries'
import { mergeFindings, withReaderChoices } from './reading-facts'
import { refuseOpenChecks } from './save-draft'
import { checkMeaning, proveSigner, type SignedReport } from './sign-report'
import { localDate } from './site-time'
import { storeVersion } from './store-version'
import { intactSnapshot } from './verify-version'

type NewVersion = z.output<typeof newVersionSchema>

/**
 * Signs a later version beside the earlier ones: added to, amended, corrected or entered in error (HL7 FHIR R4,
 * DiagnosticReport.status; never back to final). It goes to everyone who had an earlier version; what of the earlier
 * one has not left yet is held back.
 *
 * It rests on the values that were frozen at the first signature, judged by the limits that were used then.
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
  if (input.kind === 'entered-in-error') await closeStudy(context, trx, study, report)
  return { reportId, version: snapshot.version }
}

interface Next { before: ReportSnapshot, sha256: string, report: Report, study: StudyRecord, input: NewVersion }

async function nextSnapshot(context: ServiceContext, trx: Trx, { before, sha256, input, study }: Next): Promise<ReportSnapshot> {
  const draft = draftFor(input, before)
  const reassessed = reassess(before, draft)
  const next: ReportSnapshot = {
    ...before, ...reassessed, draft, draftedBy: '',
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

/** @throws DomainError 'not-valid' when an addition changes what was signed, or a change says nothing new */
function draftFor({ kind, draft }: NewVersion, before: ReportSnapshot): ReportDraft {
  if (kind === 'entered-in-error') return before.draft
  if (!draft) throw new DomainError('not-valid', { fields: [{ path: 'draft', message: 'Write what the new version says.' }] })
  if (kind === 'appended' && !onlyAdds(before.draft, draft)) throw new DomainError('not-valid', { fields: [{ path: 'kind', message: 'An addition leaves what was signed as it is. Choose "amended" or "corrected", or put the old text back.' }] })
  return draft
}

/** The frozen values judged again only where the reader's own choices changed; with the sets of that time. */
function reassess(before: ReportSnapshot, draft: ReportDraft): Pick<ReportSnapshot, 'study' | 'policy' | 'assessment' | 'findings'> {
  const same = JSON.stringify([draft.interpretCold, draft.leaveOutEntrapmentSites]) === JSON.stringify([before.draft.interpretCold, before.draft.leaveOutEntrapmentSites])
  const runs = before.study.runs.map(({ interpretColdBecause: _, ...run }) => run)
  const chosen = same ? before : withReaderChoices({ study: { ...before.study, runs }, policy: before.policy }, draft)
  const tables = before.policy.adopted.flatMap(set => referenceTable(set.setId, set.version) ?? [])
  const assessment = same ? before.assessment : assessStudy(chosen.study, tables, chosen.policy)
  const findings = mergeFindings(assessment, draft).filter(finding => !finding.left).map(({ key, runIds, text, edited }) => ({ key, runIds, text, edited }))
  return { study: chosen.study, policy: chosen.policy, assessment, findings }
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
  })
}

/** Report and values are withdrawn together; where they belong is for people to settle. */
async function closeStudy(context: ServiceContext, trx: Trx, study: StudyRecord, report: Report): Promise<void> {
  await moveState(context, trx, { subject: 'study', id: study.id, from: 'read', to: 'entered-in-error', reason: `${report.number} was entered in error` })
  await createTask(context, trx, { kind: 'entered-in-error', subject: 'referral', subjectId: study.referralId, siteId: study.siteId, ownerRole: 'administrator', sentence: `${report.number} was entered in error and withdrawn. Enter the study in the right record, and see that its physician gets a report.` })
}
