import type { Trx } from '#server/database/connection'
import { deliveryFacts } from '#server/database/queries/deliveries'
import { incidentRows, otherDeliveries, sentInstead } from '#server/database/queries/incidents'
import { auditSentence } from '#shared/audit-events'
import { DomainError } from '#shared/errors'
import { clocksOf, incidentSchema, missingForClosing, type IncidentInput, type IncidentRow, type IncidentView } from '#shared/schemas/incident'
import { changedFields } from './changed-fields'
import { now, sitesWhere, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { recordView } from './record-view'

type Row = Awaited<ReturnType<typeof incidentRows>>[number]

const rowOf = (row: Row): IncidentRow => ({
  id: row.id, reportId: row.reportId, reportNumber: row.reportNumber, version: row.version, siteName: row.siteName, recipient: row.recipient, practiceName: row.practiceName, town: row.town,
  reason: row.reason, awareAt: row.awareAt, ...clocksOf(row.awareAt), decision: row.decision, closedAt: row.closedAt, closedBy: row.closerName,
})
const inputOf = (row: Omit<IncidentInput, 'deletionConfirmed'> & { deletionConfirmed: number }): IncidentInput => incidentSchema.parse({ ...row, deletionConfirmed: row.deletionConfirmed === 1 })

export async function listIncidents(context: ServiceContext, siteIds: readonly string[]): Promise<IncidentRow[]> {
  return (await incidentRows(context.db, { siteIds })).map(rowOf)
}

/** The record with what the trail knows, and what else went to the same people. @throws DomainError 'not-found' */
export async function viewIncident(context: ServiceContext, id: string): Promise<IncidentView> {
  const sites = sitesWhere(context.actor, 'delivery.read')
  const [row] = await incidentRows(context.db, { siteIds: sites, id })
  if (!row) throw new DomainError('not-found')
  const events = await context.db.selectFrom('auditEvent').select(['at', 'name', 'dataJson', 'actorLabel']).where('subject', '=', 'delivery').where('subjectId', '=', row.deliveryId).orderBy('seq').execute()
  const others = await otherDeliveries(context.db, row)
  recordView(context, { subject: 'incident', subjectId: id, siteId: row.siteId, patientId: row.patientId })
  return {
    ...rowOf(row), ...inputOf(row), deliveryId: row.deliveryId, physicianId: row.physicianId, address: row.address, openedBy: row.openerName ?? '', revision: row.revision,
    log: events.map(event => ({ at: event.at, sentence: `${event.actorLabel}: ${auditSentence(event.name, JSON.parse(event.dataJson))}` })),
    others: others.filter(other => sites.includes(other.siteId)).map(({ siteId: _siteId, ...other }) => other),
    othersElsewhere: others.filter(other => !sites.includes(other.siteId)).length,
    sentInstead: await sentInstead(context.db, { reportId: row.reportId, physicianId: row.physicianId, after: row.openedAt }),
  }
}

async function openRecord(trx: Trx, id: string, revision: number) {
  const incident = await trx.selectFrom('incident').selectAll().where('id', '=', id).executeTakeFirst()
  if (!incident) throw new DomainError('not-found')
  if (incident.closedAt) throw new DomainError('wrong-state', { message: 'This incident is closed. Nothing in it changes any more.' })
  if (incident.revision !== revision) throw new DomainError('changed-meanwhile', { message: 'Someone changed this record while you were writing. Nothing of yours is lost: reload the page in another tab and compare.', details: { revision: incident.revision } })
  return incident
}

/** Nobody can have become aware before the delivery was made, and nothing happens tomorrow. */
function checkMoments(context: ServiceContext, input: IncidentInput, deliveredAt: string): void {
  const late = now(context)
  const fields = (['awareAt', 'contactAt', 'toldAt'] as const).flatMap(path => input[path] !== null && Date.parse(input[path]) > Date.parse(late) ? [{ path, message: 'This moment lies in the future.' }] : [])
  if (Date.parse(input.awareAt) < Date.parse(deliveredAt)) fields.push({ path: 'awareAt', message: 'This is before the report was sent.' })
  if (fields.length) throw new DomainError('not-valid', { fields })
}

/** @throws DomainError 'not-found', 'wrong-state' when closed, 'changed-meanwhile', 'not-valid' */
export async function changeIncident(context: ServiceContext, { id, revision, ...sent }: { id: string, revision: number } & IncidentInput): Promise<{ revision: number }> {
  const { deletionConfirmed, ...input } = incidentSchema.parse(sent)
  return await context.db.transaction().execute(async (trx) => {
    const before = await openRecord(trx, id, revision)
    const delivery = await deliveryFacts(trx, before.deliveryId)
    if (!delivery) throw new DomainError('not-found')
    const changes = changedFields(inputOf(before), { ...input, deletionConfirmed })
    if (changes.length === 0) return { revision }
    checkMoments(context, { ...input, deletionConfirmed }, delivery.createdAt)
    await trx.updateTable('incident').set({ ...input, deletionConfirmed: deletionConfirmed ? 1 : 0, revision: revision + 1 }).where('id', '=', id).execute()
    if (input.awareAt !== before.awareAt) await trx.updateTable('task').set({ dueAt: clocksOf(input.awareAt).authorityDueAt }).where('subject', '=', 'incident').where('subjectId', '=', id).where('doneAt', 'is', null).execute()
    await recordAuditEvent(context, trx, { name: 'incident.changed', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId, data: { number: delivery.number, version: delivery.version, incidentId: id, changes } })
    return { revision: revision + 1 }
  })
}

/**
 * Closes the record under the name of the person who decides; from then on nothing in it changes.
 * @throws DomainError 'not-found', 'wrong-state', 'changed-meanwhile', 'not-valid' with what is missing
 */
export async function closeIncident(context: ServiceContext, { id, revision }: { id: string, revision: number }): Promise<void> {
  const closedBy = context.actor.userId
  if (!closedBy) throw new DomainError('not-signed-in')
  await context.db.transaction().execute(async (trx) => {
    const incident = await openRecord(trx, id, revision)
    const missing = missingForClosing(inputOf(incident))
    if (missing.length) throw new DomainError('not-valid', { fields: missing })
    const delivery = await deliveryFacts(trx, incident.deliveryId)
    if (!delivery) throw new DomainError('not-found')
    await trx.updateTable('incident').set({ closedAt: now(context), closedBy, revision: revision + 1 }).where('id', '=', id).execute()
    await trx.updateTable('task').set({ doneAt: now(context), doneBy: closedBy, resolution: 'the incident was closed' }).where('subject', '=', 'incident').where('subjectId', '=', id).where('doneAt', 'is', null).execute()
    await recordAuditEvent(context, trx, { name: 'incident.closed', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId, data: { number: delivery.number, version: delivery.version, incidentId: id, decision: incident.decision ?? '' } })
  })
}
