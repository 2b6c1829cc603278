import type { Database } from '#server/database/connection'
import { versionLines } from '#server/database/queries/reports'
import type { ReadingView } from '#shared/schemas/report'
import type { ServiceContext } from './context'
import { readingFacts } from './reading-facts'
import { recordView } from './record-view'

/**
 * What stands beside the study on the reading page: draft, sentences, the check before signing, versions.
 * @throws DomainError 'not-found'
 */
export async function viewReading(context: ServiceContext, studyId: string, db: Database = context.db): Promise<ReadingView> {
  const facts = await readingFacts(context, db, studyId)
  const { assessed, report, draft, findings, checks, namesakes, recipients } = facts
  const versions = report ? await versionLines(db, report.id) : []
  recordView(context, { subject: 'study', subjectId: studyId, siteId: assessed.record.siteId, patientId: assessed.record.patientId })
  for (const { reportId, siteId } of facts.earlier) recordView(context, { subject: 'report', subjectId: reportId, siteId, patientId: assessed.record.patientId, because: `earlier study beside ${assessed.record.number}` })
  return {
    reportId: report?.id ?? null,
    number: report?.number ?? null,
    draft,
    draftRevision: report?.draftRevision ?? 0,
    findings,
    checks,
    fingerprint: assessed.fingerprint,
    readyToSign: report?.readyFingerprint === assessed.fingerprint,
    versions: versions.map(({ id, version, status, signedAt, signedName }) => ({ id, version, status, signedAt, signedName })),
    namesakes,
    phrases: facts.phrases,
    promptContact: facts.promptContact,
    recipients: recipients.map(({ name, practiceName, town }) => ({ name, practiceName, town })),
    ...(draft.interpretCold.length > 0 || draft.leaveOutEntrapmentSites || facts.earlier.length > 0 ? { assessment: facts.assessment } : {}),
  }
}
