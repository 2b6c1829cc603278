import type { Database } from '#server/database/connection'
import { directoryNamesakes } from '#server/database/queries/directory'
import type { Recipient } from '#server/database/queries/recipients'
import { versionLines } from '#server/database/queries/reports'
import type { ReadingView } from '#shared/schemas/report'
import type { ServiceContext } from './context'
import { organisationDay } from './organisation-day'
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
    recipients: await Promise.all(recipients.map(recipient => withNamesakes(context, db, recipient))),
    ...(draft.interpretCold.length > 0 || draft.leaveOutEntrapmentSites || facts.earlier.length > 0 || facts.referral.reportLanguage !== 'en' ? { assessment: facts.assessment } : {}),
  }
}

/** A report to the wrong one of two physicians of a name cannot be called back: whoever signs sees where the others work. */
async function withNamesakes(context: ServiceContext, db: Database, { physicianId, name, practiceName, town }: Recipient) {
  const others = await directoryNamesakes(db, { name, exceptId: physicianId, today: await organisationDay({ db, clock: context.clock }) })
  return { name, practiceName, town, namesakes: others.filter(other => !other.left).map(other => `${other.practiceName}, ${other.town}`) }
}
