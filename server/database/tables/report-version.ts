import type { Generated, Insertable, Selectable } from 'kysely'

export interface ReportVersionTable {
  id: string
  reportId: string
  version: number
  status: 'final' | 'appended' | 'amended' | 'corrected' | 'entered-in-error'
  reason: Generated<string>
  snapshotJson: string
  snapshotSha256: string
  calculationVersion: string
  signedBy: string
  signedAt: string
  signedName: string
  signedCredentials: string
  meaning: string
  auditHead: string
}
export type ReportVersion = Selectable<ReportVersionTable>
export type NewReportVersion = Insertable<ReportVersionTable>
