import type { Database } from '../connection'

export type AdoptionState = 'proposed' | 'approved' | 'in-use' | 'ended'
export interface AdoptionView {
  id: string
  siteId: string
  siteName: string
  setId: string
  setVersion: number
  techniques: string[] | null
  effectiveOn: string
  proposedBy: string
  proposedById: string
  approvedBy: string | null
  endedOn: string | null
  state: AdoptionState
}

function stateOf(row: { approvedAt: string | null, effectiveOn: string, endedOn: string | null }, today: string): AdoptionState {
  if (row.endedOn !== null && row.endedOn <= today) return 'ended'
  if (row.approvedAt === null) return 'proposed'
  return row.effectiveOn <= today ? 'in-use' : 'approved'
}

/** Where sets are in use, were, or are proposed to be. */
export async function adoptionsAt(db: Database, siteIds: readonly string[], today: string): Promise<AdoptionView[]> {
  const rows = await db.selectFrom('referenceAdoption').innerJoin('site', 'site.id', 'referenceAdoption.siteId').innerJoin('user as proposer', 'proposer.id', 'proposedBy').leftJoin('user as approver', 'approver.id', 'approvedBy')
    .select(['referenceAdoption.id', 'siteId', 'site.name as siteName', 'setId', 'setVersion', 'techniquesJson', 'effectiveOn', 'proposer.name as proposer', 'proposedBy as proposedById', 'approver.name as approver', 'approvedAt', 'endedOn'])
    .where('siteId', 'in', siteIds).orderBy('site.name').orderBy('position').orderBy('proposedAt').execute()
  return rows.map(row => ({
    id: row.id, siteId: row.siteId, siteName: row.siteName, setId: row.setId, setVersion: row.setVersion, techniques: row.techniquesJson ? JSON.parse(row.techniquesJson) as string[] : null,
    effectiveOn: row.effectiveOn, proposedBy: row.proposer, proposedById: row.proposedById, approvedBy: row.approver, endedOn: row.endedOn, state: stateOf(row, today),
  }))
}

export async function siteOfAdoption(db: Database, id: string): Promise<string | null> {
  const row = await db.selectFrom('referenceAdoption').select('siteId').where('id', '=', id).executeTakeFirst()
  return row?.siteId ?? null
}

export async function rowChecksOf(db: Database, setId: string, setVersion: number): Promise<{ rowId: string, checkedBy: string, checkedAt: string }[]> {
  return db.selectFrom('rowCheck').innerJoin('user', 'user.id', 'rowCheck.checkedBy').select(['rowId', 'user.name as checkedBy', 'checkedAt']).where('setId', '=', setId).where('setVersion', '=', setVersion).orderBy('rowId').execute()
}
