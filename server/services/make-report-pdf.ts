import type { Database } from '#server/database/connection'
import { versionLines } from '#server/database/queries/reports'
import type { ReportPdf } from '#server/database/tables/report-pdf'
import type { ReportVersion } from '#server/database/tables/report-version'
import { renderPdf } from '#server/pdf/render-pdf'
import { DomainError } from '#shared/errors'
import type { ReportSource } from '#shared/report/index'
import { sha256Hex } from './canonical-json'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { intactSnapshot } from './verify-version'

/** What page and paper are made from: the frozen copy, and the versions up to it. */
export async function reportSource(db: Database, row: ReportVersion): Promise<ReportSource> {
  const lines = await versionLines(db, row.reportId)
  const versions = lines.filter(line => line.version <= row.version).map(({ version, status, signedAt, signedName, reason }) => ({ version, status, signedAt, signedName, reason }))
  return { snapshot: intactSnapshot(row), sha256: row.snapshotSha256, auditHead: row.auditHead, preliminary: false, versions }
}

async function storedPdf(db: Database, versionId: string): Promise<ReportPdf | undefined> {
  const stored = await db.selectFrom('reportPdf').selectAll().where('reportVersionId', '=', versionId).executeTakeFirst()
  if (stored && sha256Hex(stored.bytes) !== stored.sha256) throw new DomainError('altered', { log: 'a stored PDF does not fit its hash' })
  return stored
}

const beingMade = new Map<string, Promise<ReportPdf>>()

/**
 * The PDF of a signed version: made when it is first needed, then kept with its hash and never made again.
 * @throws DomainError 'not-found', 'altered'; PdfError when it cannot be made
 */
export async function reportPdf(context: ServiceContext, versionId: string): Promise<ReportPdf> {
  const stored = await storedPdf(context.db, versionId)
  if (stored) return stored
  const making = beingMade.get(versionId) ?? makePdf(context, versionId).finally(() => beingMade.delete(versionId))
  beingMade.set(versionId, making)
  return await making
}

async function makePdf(context: ServiceContext, versionId: string): Promise<ReportPdf> {
  const row = await context.db.selectFrom('reportVersion').selectAll().where('id', '=', versionId).executeTakeFirst()
  if (!row) throw new DomainError('not-found')
  const source = await reportSource(context.db, row)
  const bytes = Buffer.from(await renderPdf(source))
  const pdf: ReportPdf = { reportVersionId: versionId, bytes, sha256: sha256Hex(bytes), madeAt: now(context) }
  await context.db.transaction().execute(async (trx) => {
    const inserted = await trx.insertInto('reportPdf').values(pdf).onConflict(conflict => conflict.doNothing()).executeTakeFirst()
    if (inserted.numInsertedOrUpdatedRows === 0n) return
    const place = await trx.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId').select(['study.siteId', 'study.patientId']).where('report.id', '=', row.reportId).executeTakeFirstOrThrow()
    await recordAuditEvent(context, trx, { name: 'report.pdf-made', subject: 'report', subjectId: row.reportId, ...place, data: { number: source.snapshot.number, version: row.version, sha256: pdf.sha256 } })
  })
  return await storedPdf(context.db, versionId) ?? pdf
}
