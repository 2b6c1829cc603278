import { readdirSync, readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { plainText, type Block, type Cell } from '#shared/report/blocks'
import { reportBlocks, reportSections, withdrawnSections, type ReportSource } from '#shared/report/index'
import { disclaimer, smallSource } from '../../../fixtures/report-source'
import { reportStudies } from '../../../fixtures/report-studies'

const kinds = ['heading', 'paragraph', 'keyValue', 'table', 'figure', 'figures', 'note']
const cellText = (cell: Cell) => 'bar' in cell ? '' : [plainText(cell.words), cell.below].filter(Boolean).join(' ')
function textOf(block: Block): string {
  switch (block.kind) {
    case 'heading': return block.text
    case 'paragraph':
    case 'note': return plainText(block.words)
    case 'keyValue': return block.items.map(item => `${item.label} ${plainText(item.words)}`).join('\n')
    case 'table': return [block.columns.map(column => column.label).join(' '), ...block.rows.map(row => row.cells.map(cellText).join(' '))].join('\n')
    case 'figure': return block.text
    case 'figures': return block.figures.map(figure => figure.text).join('\n')
  }
}
const text = (source: ReportSource, id?: string) => reportBlocks(source).filter(part => !id || part.id === id).flatMap(part => part.blocks.map(textOf)).join('\n')
const bySection = (source: ReportSource, id: string) => reportBlocks(source).find(part => part.id === id)?.blocks ?? []

describe('every section', () => {
  it('of the folder stands in the order of index.ts', () => {
    const folder = new URL('../../../../shared/report/sections/', import.meta.url)
    const exported = readdirSync(folder).flatMap(file => [...readFileSync(new URL(file, folder), 'utf8').matchAll(/^export const (\w+)(?:: ReportSection| = tableOf)/gm)].map(match => match[1]))
    const index = readFileSync(new URL('../index.ts', folder), 'utf8')
    const listed = index.slice(index.indexOf('reportSections'))
    expect(exported.length).toBeGreaterThan(20)
    expect(exported.filter(name => !new RegExp(`\\b${name}\\b`).test(listed))).toEqual([])
  })
  it.each(Object.keys(reportStudies))('gives known blocks and no hole in the text: %s', (name) => {
    const source = reportStudies[name]!()
    for (const { blocks } of reportBlocks(source)) for (const block of blocks) expect(kinds).toContain(block.kind)
    expect(text(source)).not.toMatch(/undefined|NaN|\[object|null\b/)
  })
  it.each(Object.keys(reportStudies))('tables have as many cells as columns: %s', (name) => {
    const tables = reportBlocks(reportStudies[name]!()).flatMap(part => part.blocks).filter(block => block.kind === 'table')
    for (const table of tables) for (const row of table.rows) expect(row.cells).toHaveLength(table.columns.length)
  })
  it('has an id of its own', () => {
    const ids = [...reportSections, ...withdrawnSections.filter(section => !reportSections.includes(section))].map(section => section.id)
    expect(new Set(ids).size).toBe(ids.length)
  })
})

describe('the order', () => {
  it('answers first: who, impression, correlation, limitations, then findings and tables, then the signature', () => {
    const ids = reportBlocks(smallSource()).map(part => part.id)
    const wanted = ['identity', 'impression', 'correlation', 'limitations', 'findings', 'motor', 'sensory', 'travel', 'method', 'limits', 'signature', 'disclaimer']
    expect(ids.filter(id => wanted.includes(id))).toEqual(wanted)
  })
})

describe('what must always be said', () => {
  it.each(Object.keys(reportStudies))('the disclaimer, and what ± means: %s', (name) => {
    const source = reportStudies[name]!()
    expect(text(source)).toContain(disclaimer)
    expect(text(source)).toContain('k = 2')
  })
  it('a side in every row of every table of runs, in capitals and strong in the first', () => {
    for (const make of Object.values(reportStudies)) {
      for (const block of ['motor', 'sensory', 'late'].flatMap(id => bySection(make(), id))) {
        if (block.kind !== 'table') continue
        for (const row of block.rows) expect(cellText(row.cells[0]!)).toMatch(/^(?:RIGHT|LEFT) /)
        const [first] = block.rows[0]!.cells
        expect(first && 'words' in first && first.words.some(part => part.strong && /RIGHT|LEFT/.test(part.text))).toBe(true)
      }
    }
  })
  it('recalled limits say so: once for a whole table, by a mark where only some are', () => {
    expect(text(reportStudies['carpal tunnel']!(), 'motor')).toContain('Every limit of this table is recalled, not verified')
    const mixed = text(smallSource(), 'sensory')
    expect(mixed).toContain('≤ 3.3 r · ≤ 4.0 · ≥ 7')
    expect(mixed).toContain('r: recalled, not verified against its publication.')
  })
  it('no limit is never normal: the reason stands below the table', () => {
    const child = text(reportStudies['child without limits']!(), 'motor')
    expect(child).toContain('no limit')
    expect(child).toContain('No limit: age 5 is outside 19 to 79.')
  })
  it('an absent response is neither zero nor blank', () => {
    expect(text(smallSource(), 'sensory')).toContain('no response')
  })
  it('the cold run stays, struck through, and says that it was repeated', () => {
    const [, table] = bySection(reportStudies.cold!(), 'motor')
    expect(table?.kind === 'table' && table.rows.map(row => row.struck)).toEqual([true, true, false, false])
    expect(text(reportStudies.cold!(), 'motor')).toContain('cold, repeated warm')
  })
  it('a comparison without its counterpart says why', () => {
    expect(text(reportStudies['carpal tunnel']!(), 'comparisons')).toContain('not computable: no left ulnar motor run')
  })
  it('nothing recorded', () => {
    expect(text(reportStudies.empty!())).toContain('No values were recorded.')
  })
})

describe('the reference study', () => {
  const source = reportStudies['carpal tunnel']!()
  it('has six marks of outside in its tables, and no more', () => {
    const tables = reportBlocks(source).flatMap(part => part.blocks).filter(block => block.kind === 'table')
    const marks = tables.flatMap(table => table.rows.flatMap(row => row.cells.flatMap(cell => 'words' in cell && cell.mark && cell.mark !== 'near' ? [`${cell.mark} ${plainText(cell.words)}`] : [])))
    expect(marks).toEqual(['above 5.2', 'above 3.8', 'above 4.6', 'above 1.1 ± 0.1 ms', 'above 1.3 ± 0.1 ms', 'above 2.3 ± 0.1 ms'])
  })
  it.each(['54 ± 2', '59 ± 3', '59 ± 6', '37 ± 2', '52 ± 3', '47 ± 2', '50 ± 3'])('prints the velocity %s', (printed) => {
    expect(text(source)).toContain(printed)
  })
})

describe('a preliminary print, a demonstration, a technical report', () => {
  it('say so in words', () => {
    expect(text(smallSource({}, { preliminary: true, sha256: null, auditHead: null }))).toContain('Preliminary: not signed.')
    expect(text(smallSource({}, { preliminary: true, sha256: null, auditHead: null }))).toContain('Not signed.')
    expect(text(smallSource({ demonstration: true }))).toContain('invented')
    const technical = smallSource()
    expect(text(smallSource({ draft: { ...technical.snapshot.draft, technicalOnly: true } }))).toContain('no clinical interpretation')
  })
})

describe('a later version', () => {
  const later = smallSource({ version: 2, status: 'corrected', reason: 'The side was wrong', supersedes: { version: 1, sha256: 'a'.repeat(64) }, changes: [{ what: 'Impression', before: 'Left', after: 'Right' }] })
  it('says before anything else what changed and why', () => {
    expect(reportBlocks(later)[1]?.id).toBe('changes')
    expect(text(later, 'changes')).toContain('supersedes version 1. Reason: The side was wrong')
    expect(text(later, 'changes')).toContain('before: Left; now: Right')
  })
  it('entered in error shows neither result nor text', () => {
    const withdrawn = smallSource({ status: 'entered-in-error', reason: 'Another patient', version: 2, supersedes: { version: 1, sha256: 'a'.repeat(64) } })
    expect(text(withdrawn)).toContain('Do not act on any version of it. Reason: Another patient')
    expect(text(withdrawn)).not.toMatch(/5\.2|neuropathy|Findings/)
  })
})
