import { renderPdf } from '#server/pdf/render-pdf'
import { DomainError } from '#shared/errors'
import { meanings } from '#shared/schemas/report'
import { buildSnapshot, signatureOf } from './build-snapshot'
import { now, type ServiceContext } from './context'
import { readingFacts } from './reading-facts'
import { recordAuditEvent } from './record-audit-event'

/**
 * What the report would say now, as a PDF marked PRELIMINARY across every page: to look at, never to send. It is not
 * stored and has no version, so nothing that delivers reports can find it. Each print stands in the audit trail.
 *
 * @throws DomainError 'not-found', 'wrong-state' where nothing waits for a signature; PdfError when it cannot be made
 */
export async function printPreliminary(context: ServiceContext, studyId: string): Promise<Uint8Array> {
  const facts = await readingFacts(context, context.db, studyId)
  const { record } = facts.assessed
  if (record.state !== 'handed-over') throw new DomainError('wrong-state', { message: 'A preliminary print is made of a study that waits for a signature.', details: { state: record.state } })
  const number = facts.report?.number ?? record.number
  const signature = await signatureOf(context, context.db, facts.draft.technicalOnly ? meanings[1] : meanings[0], now(context), facts.site.timeZone)
  const snapshot = await buildSnapshot(context, context.db, facts, { number, signature })
  const bytes = await renderPdf({ snapshot, sha256: null, auditHead: null, preliminary: true, versions: [] })
  await context.db.transaction().execute(trx => recordAuditEvent(context, trx, { name: 'report.preliminary-printed', subject: 'study', subjectId: studyId, siteId: record.siteId, patientId: record.patientId, data: { number } }))
  return bytes
}
