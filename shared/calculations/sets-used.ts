import type { ReferenceTable } from '../schemas/reference-table'
import type { AppliedLimit, Assessment } from './types'

/**
 * The sets whose limits were applied in this study, with how many of those rows rest on memory, and how many of
 * these a named person compared with the paper.
 */
export function setsUsed(applied: ReadonlySet<AppliedLimit>, tables: readonly ReferenceTable[]): Assessment['setsUsed'] {
  const found: { set: Assessment['setsUsed'][number], rowIds: Set<string> }[] = []
  for (const limit of applied) {
    let known = found.find(({ set }) => set.setId === limit.setId && set.version === limit.setVersion)
    if (!known) found.push(known = { set: emptySet(limit, tables), rowIds: new Set() })
    if (known.rowIds.has(limit.rowId)) continue
    known.rowIds.add(limit.rowId)
    if (limit.basis !== 'from memory') continue
    known.set.recalledRows += 1
    if (limit.verified) known.set.verifiedRows += 1
  }
  return found.map(({ set }) => set).sort((a, b) => a.setId < b.setId ? -1 : a.setId > b.setId ? 1 : a.version - b.version)
}

function emptySet(limit: AppliedLimit, tables: readonly ReferenceTable[]): Assessment['setsUsed'][number] {
  const table = tables.find(one => one.id === limit.setId && one.version === limit.setVersion)
  return {
    setId: limit.setId, version: limit.setVersion, title: limit.setTitle,
    citation: table?.citation ?? '', percentiles: table?.declared.words ?? '', recalledRows: 0, verifiedRows: 0,
  }
}
