import type * as z from 'zod'
import { idsOfNumber, listLedger, recordHistory, type LedgerQuery } from '#server/database/queries/ledger'
import { DomainError } from '#shared/errors'
import type { Page } from '#shared/schemas/common'
import type { AccessReport, LedgerExport, LedgerRow, ledgerExportSchema, ledgerQuerySchema } from '#shared/schemas/user'
import { now, type ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { flushViews } from './record-view'
import { dayBounds } from './site-time'

/** More would not open in a spreadsheet anyway; the days narrow it down. */
const MOST_EXPORTED = 50_000

/** The days as moments in the organisation's zone, the number as ids. */
async function resolved(context: ServiceContext, { from, to, number, ...query }: z.output<typeof ledgerQuerySchema>): Promise<LedgerQuery> {
  const organisation = await context.db.selectFrom('organisation').select('timeZone').executeTakeFirst()
  const zone = organisation?.timeZone ?? 'UTC'
  return {
    ...query, ...from ? { since: dayBounds(from, zone).from } : {}, ...to ? { until: dayBounds(to, zone).until } : {},
    ...number ? { about: await idsOfNumber(context.db, number) } : {},
  }
}

export async function viewLedger(context: ServiceContext, sites: readonly string[], query: z.output<typeof ledgerQuerySchema>): Promise<Page<LedgerRow>> {
  return await listLedger(context.db, sites, await resolved(context, query))
}

/** The list as rows for a spreadsheet; that it was taken out of the house is in the ledger itself. */
export async function exportLedger(context: ServiceContext, sites: readonly string[], query: z.output<typeof ledgerExportSchema>): Promise<LedgerExport> {
  const { rows, total } = await listLedger(context.db, sites, await resolved(context, { ...query, page: 1, pageSize: MOST_EXPORTED }))
  await context.db.transaction().execute(trx => recordAuditEvent(context, trx, { name: 'ledger.exported', subject: 'audit', subjectId: query.chain, data: { chain: query.chain, rows: rows.length } }))
  return {
    head: ['number', 'time (UTC)', 'who', 'event', 'what', 'about', 'id', 'site'],
    rows: rows.map(row => [String(row.seq), row.at, row.actor, row.name, row.sentence, row.subject, row.subjectId, row.siteName ?? '']),
    left: total - rows.length,
  }
}

/**
 * Who saw and did what with one record, at every site, for the patient. That it was made, and to whom it was handed, is
 * itself an entry; nobody's clinical text stands in it.
 * @throws DomainError 'not-valid' when no patient has that number
 */
export async function makeAccessReport(context: ServiceContext, { number, handedTo }: { number: string, handedTo: string }): Promise<AccessReport> {
  await flushViews(context)
  const patient = await context.db.selectFrom('patient').selectAll().where('recordNumber', '=', number.toUpperCase()).where('mergedInto', 'is', null).executeTakeFirst()
  if (!patient) throw new DomainError('not-valid', { fields: [{ path: 'number', message: 'No patient has this record number. It stands in the patient band, for example P-000012.' }] })
  const merged = await context.db.selectFrom('patient').select('id').where('mergedInto', '=', patient.id).execute()
  const organisation = await context.db.selectFrom('organisation').select('name').executeTakeFirstOrThrow()
  const entries = await recordHistory(context.db, [patient.id, ...merged.map(row => row.id)])
  await context.db.transaction().execute(trx => recordAuditEvent(context, trx, { name: 'patient.access-report', subject: 'patient', subjectId: patient.id, patientId: patient.id, data: { entries: entries.length, handedTo } }))
  return { recordNumber: patient.recordNumber, name: `${patient.familyName}, ${patient.givenName}`, birthDate: patient.birthDate, organisation: organisation.name, madeAt: now(context), madeBy: context.actor.label, entries }
}
