import { randomUUID } from 'node:crypto'
import { equipmentView } from '#server/database/queries/equipment'
import { DomainError } from '#shared/errors'
import type { EquipmentView } from '#shared/equipment'
import type { changeEquipmentSchema, EquipmentInput } from '#shared/schemas/bench-day'
import type * as z from 'zod'
import { changedFields } from './changed-fields'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

/** Adds a device to a site, with the dates until which its calibration and its electrical-safety check hold. */
export async function addEquipment(context: ServiceContext, { siteId, ...input }: EquipmentInput & { siteId: string }): Promise<EquipmentView> {
  return context.db.transaction().execute(async (trx) => {
    const site = await trx.selectFrom('site').select('id').where('id', '=', siteId).where('closedAt', 'is', null).executeTakeFirst()
    if (!site) throw new DomainError('not-found')
    const row = await trx.insertInto('equipment').values({ id: randomUUID(), siteId, ...input, retiredAt: null, createdAt: now(context), createdBy: context.actor.userId }).returningAll().executeTakeFirstOrThrow()
    await recordAuditEvent(context, trx, { name: 'equipment.added', subject: 'equipment', subjectId: row.id, siteId, data: { kind: row.kind } })
    return equipmentView(row)
  })
}

/**
 * Changes a device, or retires it: it then is no longer offered, and stays with the studies it recorded.
 * @throws DomainError 'changed-meanwhile'
 */
export async function changeEquipment(context: ServiceContext, { id, revision, retired, ...input }: z.output<typeof changeEquipmentSchema> & { id: string }): Promise<EquipmentView> {
  return context.db.transaction().execute(async (trx) => {
    const before = await trx.selectFrom('equipment').selectAll().where('id', '=', id).executeTakeFirst()
    if (!before) throw new DomainError('not-found')
    if (before.revision !== revision) throw new DomainError('changed-meanwhile', { details: { theirs: equipmentView(before) } })
    const retiredAt = retired === undefined ? before.retiredAt : retired ? before.retiredAt ?? now(context) : null
    const after = { name: before.name, serial: before.serial, kind: before.kind, calibrationDue: before.calibrationDue, safetyDue: before.safetyDue, ...Object.fromEntries(Object.entries(input).filter(([, value]) => value !== undefined)), retiredAt }
    const { id: _id, siteId: _site, createdAt: _at, createdBy: _by, revision: _revision, ...stood } = before
    const changes = changedFields(stood, after)
    if (changes.length === 0) return equipmentView(before)
    const row = await trx.updateTable('equipment').set({ ...after, revision: revision + 1 }).where('id', '=', id).returningAll().executeTakeFirstOrThrow()
    await recordAuditEvent(context, trx, { name: 'equipment.changed', subject: 'equipment', subjectId: id, siteId: row.siteId, data: { changes } })
    return equipmentView(row)
  })
}
