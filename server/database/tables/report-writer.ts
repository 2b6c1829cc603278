import type { Insertable, Selectable } from 'kysely'

/** Everybody who wrote in the draft of a report: the signer is named by the signature, the others beside it. */
export interface ReportWriterTable {
  reportId: string
  userId: string
  firstAt: string
}
export type ReportWriter = Selectable<ReportWriterTable>
export type NewReportWriter = Insertable<ReportWriterTable>
