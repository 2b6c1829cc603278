import type { ReferenceTable } from '../schemas/reference-table'
import type { AppliedLimit, Assessment } from './types'

/**
 * The sets whose limits were applied in this study, with how many of those rows rest on memory, and how many of
 * these a named person compared with the paper.
 */
export function setsUsed(applied: ReadonlySet<AppliedLimit>, tables: readonly ReferenceTable[]): Assessment['setsUsed'] {
  const sets = new Map<string, Assessment['setsUsed'][number]>()
  const seen = new Set<string>()
  for (const limit of applied) {
    const key = `${limit.setId}/${limit.setVersion}`
    if (seen.has(`${key}/${limit.rowId}`)) continue
    seen.add(`${key}/${limit.rowId}`)
    const set = sets.get(key) ?? emptySet(limit, tables)
    if (limit.basis === 'from memory') {
      set.recalledRows += 1
      if (limit.verified) set.verifiedRows += 1
    }
    sets.set(key, set)
  }
  return [...sets.values()].sort((a, b) => a.setId < b.setId ? -1 : a.setId > b.setId ? 1 : a.version - b.version)
}

function emptySet(limit: AppliedLimit, tables: readonly ReferenceTable[]): Assessment['setsUsed'][number] {
  const table = tables.find(one => one.id === limit.setId && one.version === limit.setVersion)
  return {
    setId: limit.setId, version: limit.setVersion, title: limit.setTitle,
    citation: table?.citation ?? '', percentiles: table?.declared.words ?? '', recalledRows: 0, verifiedRows: 0,
  }
}
