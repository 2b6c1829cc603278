import type { Generated, Insertable, Selectable } from 'kysely'
import type { EquipmentKind } from '#shared/equipment'

export interface EquipmentTable {
  id: string
  siteId: string
  name: string
  serial: Generated<string>
  kind: EquipmentKind
  calibrationDue: string | null
  safetyDue: string | null
  retiredAt: string | null
  createdAt: string
  createdBy: string | null
  revision: Generated<number>
}
export type Equipment = Selectable<EquipmentTable>
export type NewEquipment = Insertable<EquipmentTable>
