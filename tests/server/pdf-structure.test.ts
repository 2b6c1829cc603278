import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { getDocument } from 'pdfjs-dist/legacy/build/pdf.mjs'
import { afterAll, describe, expect, it } from 'vitest'
import { encryptPdf } from '#server/pdf/encrypt-pdf'
import { closePdfThread, renderPdf } from '#server/pdf/render-pdf'
import { smallSource } from '../fixtures/report-source'
import { reportStudies } from '../fixtures/report-studies'
import { flat, marksOf, objectsOf, run, structureOf, type StructureElement } from './pdf-reading'

const folder = mkdtempSync(join(tmpdir(), 'orthodrome-structure-'))
afterAll(closePdfThread)
const made = new Map<string, string>()
async function pathOf(name: string): Promise<string> {
  const known = made.get(name)
  if (known) return known
  const path = join(folder, `${name.replaceAll(' ', '-')}.pdf`)
  writeFileSync(path, await renderPdf(reportStudies[name]!()))
  made.set(name, path)
  return path
}
const elementsOf = (path: string) => flat(structureOf(path)!)
const typesBelow = (element: StructureElement) => element.children.map(child => child.type)

describe.each(Object.keys(reportStudies))('the structure of: %s', (name) => {
  it('is a tree of headings, paragraphs, lists, tables and figures under one document', async () => {
    const path = await pathOf(name)
    const { catalog, follow, dictionaries } = objectsOf(path)
    expect(catalog['/Lang']).toBe('u:en')
    expect(follow(catalog['/MarkInfo'])).toMatchObject({ '/Marked': true })
    expect(follow(catalog['/ViewerPreferences'])).toMatchObject({ '/DisplayDocTitle': true })
    for (const page of dictionaries.filter(one => one['/Type'] === '/Page')) expect(page['/Tabs']).toBe('/S')
    const elements = elementsOf(path)
    expect(elements[0]!.type).toBe('Document')
    const headings = elements.filter(element => /^H\d$/.test(element.type))
    expect(headings[0]!.type).toBe('H1')
    expect(headings.slice(1).every(element => element.type === 'H2')).toBe(true)
    expect(headings.length).toBeGreaterThan(3)
    expect(elements.some(element => element.type === 'LI' && typesBelow(element).join() === 'Lbl,LBody')).toBe(true)
  })
  it('each table has a row of column heads, and each further row its own head', async () => {
    for (const table of elementsOf(await pathOf(name)).filter(element => element.type === 'Table')) {
      expect(table.title).not.toBe('')
      const [head, ...rows] = table.children
      expect(head!.children.every(cell => cell.type === 'TH' && cell.scope === 'Column')).toBe(true)
      expect(rows.length).toBeGreaterThan(0)
      for (const row of rows) {
        expect(row.children).toHaveLength(head!.children.length)
        expect(row.children.map(cell => `${cell.type} ${cell.scope}`)).toEqual(['TH Row', ...head!.children.slice(1).map(() => 'TD ')])
      }
    }
  })
  it('every figure says in words what it shows', async () => {
    for (const figure of elementsOf(await pathOf(name)).filter(element => element.type === 'Figure')) {
      expect(figure.alt.length).toBeGreaterThan(10)
      expect(figure.marks).toHaveLength(1)
    }
  })
  it('whatever is painted is an artefact or belongs to exactly one element', async () => {
    const path = await pathOf(name)
    const pages = marksOf(readFileSync(path))
    expect(pages.flatMap(page => page.unmarked)).toEqual([])
    expect(pages.every(page => page.artefacts > 3)).toBe(true)
    const owned = elementsOf(path).flatMap(element => element.marks.map(mark => `${mark.page}/${mark.id}`))
    expect(new Set(owned).size).toBe(owned.length)
    expect(owned.length).toBe(pages.reduce((sum, page) => sum + page.ids.length, 0))
  })
})

describe('reading order', () => {
  it('the answer comes before the numbers, as on the page', async () => {
    const text = run('pdfinfo', '-struct-text', await pathOf('carpal tunnel'))
    const places = ['Report of nerve conduction studies', 'SAMPLE, Patient A', '"Impression"', 'RIGHT median neuropathy at the wrist.', '"Findings"', '"Motor"', '"Sensory"', '"Travel plots"', '"Signature"'].map(word => text.indexOf(word))
    expect(places.every(place => place >= 0)).toBe(true)
    expect([...places].sort((a, b) => a - b)).toEqual(places)
  })
  it('a head repeated on a later page and the running title are read once', async () => {
    const path = await pathOf('gbs')
    expect(run('pdftotext', '-layout', path, '-').split('stimulated at').length - 1).toBeGreaterThan(2)
    const text = run('pdfinfo', '-struct-text', path)
    const tables = elementsOf(path).filter(element => element.type === 'Table')
    const heads = tables.flatMap(table => table.children[0]!.children)
    expect(new Set(heads.flatMap(head => head.marks).map(mark => `${mark.page}/${mark.id}`)).size).toBe(heads.flatMap(head => head.marks).length)
    expect(text.split('"Report of nerve conduction studies').length - 1).toBe(1)
    expect(text).not.toContain('page 2 of')
  })
  it('another reader finds the same tree', async () => {
    const document = await getDocument({ data: new Uint8Array(readFileSync(await pathOf('carpal tunnel'))), useSystemFonts: false, verbosity: 0 }).promise
    const roles: string[] = []
    const walk = (node: { role?: string, children?: unknown[] }) => {
      if (node.role) roles.push(node.role)
      for (const child of node.children ?? []) walk(child as { role?: string, children?: unknown[] })
    }
    for (let page = 1; page <= document.numPages; page++) walk(await (await document.getPage(page)).getStructTree())
    await document.destroy()
    for (const role of ['Document', 'H1', 'H2', 'P', 'L', 'LI', 'Table', 'TR', 'TH', 'TD', 'Figure']) expect(roles).toContain(role)
  })
  it('a watermark belongs to no element', async () => {
    const stamped = await renderPdf(smallSource({ demonstration: true }))
    const path = join(folder, 'stamped.pdf')
    writeFileSync(path, stamped)
    expect(marksOf(stamped).flatMap(page => page.unmarked)).toEqual([])
    expect(elementsOf(path).filter(element => element.type === 'Figure').length).toBe(elementsOf(path).filter(element => element.type === 'Figure' && element.alt).length)
  })
})

it('encrypted for a sending, the tree is the same', async () => {
  const path = await pathOf('polyneuropathy')
  const passphrase = 'lagoon quartz tulip walnut bridge otter copper mosaic'
  const encrypted = join(folder, 'encrypted.pdf')
  writeFileSync(encrypted, encryptPdf(readFileSync(path), passphrase))
  expect(run('qpdf', `--password=${passphrase}`, '--check', encrypted)).toContain('No syntax or stream encoding errors')
  expect(structureOf(encrypted, `--password=${passphrase}`)).toEqual(structureOf(path))
})
