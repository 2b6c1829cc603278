import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { reportOfStudy } from '#server/database/queries/reports'
import type { Report } from '#server/database/tables/report'
import type { Study } from '#server/database/tables/study'
import { DomainError } from '#shared/errors'
import { isOpen } from '#shared/report/sign-checks'
import type { ReadingView, ReportDraft } from '#shared/schemas/report'
import { canonicalJson } from './canonical-json'
import { now, type ServiceContext } from './context'
import { nextNumber } from './next-number'
import { draftOf, readingFacts } from './reading-facts'
import { recordAuditEvent } from './record-audit-event'
import { studyToRead } from './take-study'
import { viewReading } from './view-reading'

/** Between which the report's own record begins: with its number, before anything is signed. */
export async function ensureReport(context: ServiceContext, trx: Trx, study: Study): Promise<Report> {
  const known = await reportOfStudy(trx, study.id)
  if (known) return known
  const at = now(context)
  const number = await nextNumber(trx, 'report', Number(at.slice(0, 4)))
  const report = await trx.insertInto('report').values({ id: randomUUID(), studyId: study.id, number, draftRevision: 0, readyFingerprint: null, draftedBy: null, draftedAt: at, createdAt: at }).returningAll().executeTakeFirstOrThrow()
  await recordAuditEvent(context, trx, { name: 'report.drafted', subject: 'report', subjectId: report.id, siteId: study.siteId, patientId: study.patientId, data: { number } })
  return report
}

function checkReader(context: ServiceContext, study: Study): void {
  if (study.readerId !== null && study.readerId !== context.actor.userId) throw new DomainError('wrong-state', { message: 'Another reader has this study. Take it over first; the draft is kept.', details: { readerId: study.readerId } })
}

/**
 * Stores the draft if nobody changed it since `revision`. Whoever writes first takes the study.
 * @throws DomainError 'changed-meanwhile' with the stored draft in `details`, 'wrong-state', 'already-signed'
 */
export async function saveDraft(context: ServiceContext, { studyId, draft, revision }: { studyId: string, draft: ReportDraft, revision: number }): Promise<{ revision: number, savedAt: string, view: ReadingView }> {
  const savedAt = now(context)
  const saved = await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, studyId)
    checkReader(context, study)
    const report = await ensureReport(context, trx, study)
    if (report.draftRevision !== revision) throw new DomainError('changed-meanwhile', { details: { draft: draftOf(report), revision: report.draftRevision } })
    if (study.readerId === null) {
      await trx.updateTable('study').set({ readerId: context.actor.userId, takenAt: savedAt }).where('id', '=', studyId).execute()
      await recordAuditEvent(context, trx, { name: 'study.taken', subject: 'study', subjectId: studyId, siteId: study.siteId, patientId: study.patientId, data: { from: null } })
    }
    const draftJson = canonicalJson(draft)
    if (draftJson === report.draftJson) return report.draftRevision
    await trx.insertInto('reportWriter').values({ reportId: report.id, userId: context.actor.userId!, firstAt: savedAt }).onConflict(conflict => conflict.doNothing()).execute()
    await trx.updateTable('report').set({ draftJson, draftRevision: revision + 1, readyFingerprint: null, draftedBy: context.actor.userId, draftedAt: savedAt }).where('id', '=', report.id).execute()
    return revision + 1
  })
  return { revision: saved, savedAt, view: await viewReading(context, studyId) }
}

/** The same two things a signature states: which draft and which numbers were looked at. */
export interface Looked { draftRevision: number, fingerprint: string }

/**
 * Marks the report ready to sign, for a supervisor or for later. A changed row or a changed draft takes the mark back.
 * @throws DomainError 'not-ready' with the open points, 'changed-meanwhile'
 */
export async function markReady(context: ServiceContext, { studyId, draftRevision, fingerprint }: { studyId: string } & Partial<Looked>): Promise<ReadingView> {
  await context.db.transaction().execute(async (trx) => {
    const study = await studyToRead(trx, studyId)
    if (study.state !== 'handed-over') throw new DomainError('wrong-state', { details: { state: study.state } })
    const facts = await readingFacts(context, trx, studyId)
    const changed = (fingerprint !== undefined && fingerprint !== facts.assessed.fingerprint) || (draftRevision !== undefined && draftRevision !== (facts.report?.draftRevision ?? 0))
    if (changed) throw new DomainError('changed-meanwhile', { message: 'The draft or a value changed meanwhile. Look at the page again.' })
    refuseOpenChecks(facts.checks)
    const report = await ensureReport(context, trx, study)
    await trx.updateTable('report').set({ readyFingerprint: facts.assessed.fingerprint }).where('id', '=', report.id).execute()
    await recordAuditEvent(context, trx, { name: 'report.ready', subject: 'report', subjectId: report.id, siteId: study.siteId, patientId: study.patientId, data: { number: report.number, fingerprint: facts.assessed.fingerprint } })
  })
  return await viewReading(context, studyId)
}

/** @throws DomainError 'not-ready' */
export function refuseOpenChecks(checks: ReadingView['checks']): void {
  const open = checks.filter(isOpen)
  if (open.length > 0) throw new DomainError('not-ready', { details: { checks: open }, fields: open.map(item => ({ path: item.key, message: item.sentence })) })
}
