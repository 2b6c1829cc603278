/** What stood in each changed field before: the audit trail keeps it, since the record keeps only the new value. */
export function changedFields<T extends object>(before: T, after: Partial<T>): { field: string, before: unknown }[] {
  return (Object.keys(after) as (keyof T & string)[])
    .filter(field => after[field] !== undefined && JSON.stringify(before[field]) !== JSON.stringify(after[field]))
    .map(field => ({ field, before: before[field] ?? null }))
}
