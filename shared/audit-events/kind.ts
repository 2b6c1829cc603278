import * as z from 'zod'

/** The shape of an event's data and the sentence that the ledger shows. */
export interface AuditEventKind<S extends z.ZodType> { schema: S, sentence: (data: z.output<S>) => string }

export function event<S extends z.ZodType>(schema: S, sentence: (data: z.output<S>) => string): AuditEventKind<S> {
  return { schema, sentence }
}

export const nothing = z.object({})
/** Changed fields with what stood there before: the new value stands in the record, the old one nowhere else. */
export const changes = z.object({ changes: z.array(z.object({ field: z.string(), before: z.unknown() })) })
export const changedFields = (data: z.output<typeof changes>): string => data.changes.map(change => change.field).join(', ')
