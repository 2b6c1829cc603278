import { deskReferrals, deskReports, entriesOfAccount, sentVersionsOf } from '#server/database/queries/desk'
import type { Database, Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { AcknowledgeView } from '#shared/schemas/delivery'
import type { DeskPage, DeskReferral } from '#shared/schemas/desk'
import type { ReportView } from '#shared/schemas/report'
import { acknowledgeIn } from './acknowledge-delivery'
import { writeReply } from './answer-link'
import { now, type ServiceContext } from './context'
import { reportPdf } from './make-report-pdf'
import { moveState } from './move-state'
import { organisationDay } from './organisation-day'
import { recordView } from './record-view'
import { viewReport } from './view-report'

/** What the laboratory says to the referring physician; reasons of other states are its own affair. */
const reasonsForReferrer = ['returned', 'declined', 'cancelled', 'did-not-attend']

/** The directory entries that the account of this request stands for now. */
export async function ownEntries(context: ServiceContext) {
  return await entriesOfAccount(context.db, context.actor.userId ?? '', await organisationDay(context))
}

/** The referrals of the physician who is signed in, with the reports that were sent to them; nobody else's. */
export async function viewDesk(context: ServiceContext, query: { show: 'all' | 'open' | 'answered', page: number, pageSize: number }): Promise<DeskPage> {
  const entries = await ownEntries(context)
  const physicianIds = entries.map(entry => entry.id)
  const { rows, total } = await deskReferrals(context.db, { ...query, physicianIds })
  const reports = await deskReports(context.db, physicianIds, rows.map(row => row.id))
  return {
    rows: rows.map(({ physicianId, bookingStartsAt, stateReason, asked, ...row }): DeskReferral => ({
      ...row, reason: reasonsForReferrer.includes(row.state) ? stateReason : '', bookedFor: row.state === 'booked' ? bookingStartsAt : null, copy: !physicianIds.includes(physicianId ?? ''), answerable: Number(asked) === 1 && physicianIds.includes(physicianId ?? ''),
      reports: latestOnly(reports.filter(report => report.referralId === row.id)).map(({ referralId: _referralId, superseded, ...report }) => ({ ...report, superseded: Number(superseded) === 1 })),
    })),
    total, page: query.page, pageSize: query.pageSize,
    practices: entries.map(({ name, town }) => ({ name, town })),
  }
}

/** One line for each report: its latest version; the rows come with the latest first. */
function latestOnly<R extends { reportId: string }>(rows: readonly R[]): R[] {
  return rows.filter((row, index) => rows.findIndex(other => other.reportId === row.reportId) === index)
}

/**
 * A final version that was sent to the physician who is signed in, the latest of them where none is named.
 * @throws DomainError 'not-found' for everything else, whether it exists or not
 */
export async function ownVersion(context: ServiceContext, { reportId, version }: { reportId: string, version?: number }) {
  const sent = await sentVersionsOf(context.db, (await ownEntries(context)).map(entry => entry.id), reportId)
  const found = sent.find(row => version === undefined || row.version === version)
  if (!found) throw new DomainError('not-found')
  return { ...found, versions: sent.map(row => row.version) }
}

export interface DeskReportView { report: ReportView, deliveryId: string, acknowledgedAt: string | null, /** what was written about this version from here, and whether it was answered */ replies: AcknowledgeView['replies'] }

/** The same frozen copy as in the laboratory, with the versions that were sent here; what went back inside stays inside. @throws DomainError as `ownVersion` */
export async function viewDeskReport(context: ServiceContext, asked: { reportId: string, version?: number }): Promise<DeskReportView> {
  const own = await ownVersion(context, asked)
  const report = await viewReport(context, { reportId: asked.reportId, version: own.version })
  const replies = await repliesTo(context, own.deliveryId)
  return { report: { ...report, versions: report.versions.filter(line => own.versions.includes(line.version)), route: report.route.map(node => ({ ...node, wentBack: [] })) }, deliveryId: own.deliveryId, acknowledgedAt: own.acknowledgedAt, replies }
}

/** The stored PDF of such a version, in clear: the connection and the sign-in protect it. @throws DomainError as `ownVersion` */
export async function deskReportPdf(context: ServiceContext, asked: { reportId: string, version?: number }): Promise<Uint8Array> {
  const own = await ownVersion(context, asked)
  const pdf = await reportPdf(context, own.id)
  recordView(context, { subject: 'report', subjectId: asked.reportId, siteId: own.siteId, patientId: own.patientId })
  return pdf.bytes
}

const repliesTo = (context: ServiceContext, deliveryId: string): Promise<AcknowledgeView['replies']> => context.db.selectFrom('deliveryReply').select(['at', 'answeredAt']).where('deliveryId', '=', deliveryId).orderBy('at').execute()

/** A delivery to the physician who is signed in, once it left. @throws DomainError 'not-found' for every other */
async function ownDelivery(context: ServiceContext, db: Database | Trx, deliveryId: string) {
  const entries = await ownEntries(context)
  const delivery = await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId')
    .select(['delivery.id', 'delivery.state', 'delivery.siteId', 'delivery.reportVersionId', 'report.number', 'reportVersion.version', 'study.patientId'])
    .where('delivery.id', '=', deliveryId).where('delivery.physicianId', 'in', entries.map(entry => entry.id)).where('delivery.state', 'not in', ['held', 'withdrawn']).executeTakeFirst()
  if (!delivery) throw new DomainError('not-found')
  return delivery
}

/**
 * "I have it": acknowledges an own delivery. A second press changes nothing.
 * @throws DomainError 'not-found' for a delivery to someone else, a withdrawn one, or one that did not leave
 */
export async function acknowledgeOwn(context: ServiceContext, deliveryId: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const delivery = await ownDelivery({ ...context, db: trx }, trx, deliveryId)
    if (delivery.state === 'given-up' || delivery.state === 'bounced') await readHere(context, trx, delivery.id)
    await acknowledgeIn(context, trx, delivery)
  })
}

/**
 * "I think this is wrong": the words reach the neurologist who signed, with the name of who is signed in.
 * @throws DomainError as `acknowledgeOwn`, 'too-many-requests' after five a day
 */
export async function replyOwn(context: ServiceContext, { id, words }: { id: string, words: string }): Promise<Pick<DeskReportView, 'replies'>> {
  await writeReply(context, await ownDelivery(context, context.db, id), { words, fromName: context.actor.label })
  return { replies: await repliesTo(context, id) }
}

/** What could not be mailed has reached them all the same: nobody needs to deliver it by hand any more. */
async function readHere(context: ServiceContext, trx: Trx, deliveryId: string): Promise<void> {
  await moveState(context, trx, { subject: 'delivery', id: deliveryId, from: ['given-up', 'bounced'], to: 'by-hand', reason: 'read at the desk' })
  await trx.updateTable('outboxMail').set({ state: 'withdrawn' }).where('deliveryId', '=', deliveryId).execute()
  await trx.updateTable('task').set({ doneAt: now(context), doneBy: context.actor.userId, resolution: 'read at the desk' }).where('subjectId', '=', deliveryId).where('kind', '=', 'deliver-by-hand').where('doneAt', 'is', null).execute()
}
