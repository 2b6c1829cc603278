import * as z from 'zod'

/** The shape of an event's data and the sentence that the ledger shows. */
export interface AuditEventKind<S extends z.ZodType> { schema: S, sentence: (data: z.output<S>) => string }

export function event<S extends z.ZodType>(schema: S, sentence: (data: z.output<S>) => string): AuditEventKind<S> {
  return { schema, sentence }
}

export const nothing = z.object({})
/** Changed fields with what stood there before; for accounts, sites and the directory also what stands there now. */
export const changes = z.object({ changes: z.array(z.object({ field: z.string(), before: z.unknown(), after: z.unknown().optional() })) })
export const changedFields = (data: z.output<typeof changes>): string => data.changes.map(change => change.field).join(', ')
