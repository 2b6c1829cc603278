import type { Insertable, Selectable } from 'kysely'

export interface ReportPdfTable {
  reportVersionId: string
  bytes: Uint8Array
  sha256: string
  madeAt: string
}
export type ReportPdf = Selectable<ReportPdfTable>
export type NewReportPdf = Insertable<ReportPdfTable>
