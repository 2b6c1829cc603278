import type { EquipmentView } from '#shared/equipment'
import type { Database } from '../connection'
import type { Equipment } from '../tables/equipment'

export function equipmentView({ id, siteId, name, serial, kind, calibrationDue, safetyDue, retiredAt, revision }: Equipment): EquipmentView {
  return { id, siteId, name, serial, kind, calibrationDue, safetyDue, retired: retiredAt !== null, revision }
}

/** The equipment of a site by name; what was retired comes last. */
export async function equipmentAt(db: Database, siteId: string): Promise<EquipmentView[]> {
  const rows = await db.selectFrom('equipment').selectAll().where('siteId', '=', siteId).orderBy('name').orderBy('serial').execute()
  return [...rows.filter(row => row.retiredAt === null), ...rows.filter(row => row.retiredAt !== null)].map(equipmentView)
}

export async function siteOfEquipment(db: Database, id: string): Promise<string | null> {
  const row = await db.selectFrom('equipment').select('siteId').where('id', '=', id).executeTakeFirst()
  return row?.siteId ?? null
}
