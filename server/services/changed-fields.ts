/** What stood in each changed field before: the audit trail keeps it, since the record keeps only the new value. */
export function changedFields<T extends object>(before: T, after: Partial<T>): { field: string, before: unknown }[] {
  return changedValues(before, after).map(({ field, before: stood }) => ({ field, before: stood }))
}

/**
 * Old and new value of each changed field (21 CFR 11.10(e): a change must not obscure what was recorded before; read).
 * For accounts, sites and the directory; of patients the trail keeps the old value only, the new one stands in the record.
 */
export function changedValues<T extends object>(before: T, after: Partial<T>): { field: string, before: unknown, after: unknown }[] {
  return (Object.keys(after) as (keyof T & string)[])
    .filter(field => after[field] !== undefined && JSON.stringify(before[field]) !== JSON.stringify(after[field]))
    .map(field => ({ field, before: before[field] ?? null, after: after[field] ?? null }))
}
