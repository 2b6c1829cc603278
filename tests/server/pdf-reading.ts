import { execFileSync } from 'node:child_process'
import { inflateSync } from 'node:zlib'
import { readPlainPdf, tokens } from '#server/pdf/pdf-syntax'

/** Programs from Debian's poppler and qpdf that look at a PDF from outside. */
export const run = (program: string, ...args: string[]) => execFileSync(program, args, { encoding: 'utf8', stdio: ['ignore', 'pipe', 'pipe'], maxBuffer: 1e9 })
/** Text as people and programs get it out again: compatibility forms folded, white space collapsed. */
export const textOf = (path: string) => run('pdftotext', '-layout', path, '-').normalize('NFKC').replace(/\s+/g, ' ')
export const pagesOf = (path: string) => Number(/Pages: +(\d+)/.exec(run('pdfinfo', path))![1])

type PdfValue = string | number | boolean | null | PdfValue[] | PdfDictionary
interface PdfDictionary { [key: string]: PdfValue | undefined }
export interface StructureElement { type: string, alt: string, scope: string, title: string, children: StructureElement[], marks: { page: string, id: number }[] }

/** The object tree as qpdf reads it. */
export function objectsOf(path: string, ...options: string[]) {
  const all = JSON.parse(run('qpdf', '--json=2', ...options, path)).qpdf[1] as Record<string, { value?: PdfValue, stream?: { dict: PdfDictionary } }>
  const follow = (value: PdfValue | undefined): PdfValue | undefined => typeof value === 'string' && / R$/.test(value) ? all[`obj:${value}`]?.value ?? all[`obj:${value}`]?.stream?.dict : value
  const dictionaries = Object.values(all).flatMap(object => object.value && typeof object.value === 'object' && !Array.isArray(object.value) ? [object.value] : object.stream ? [object.stream.dict] : [])
  const catalog = dictionaries.find(one => one['/Type'] === '/Catalog')!
  return { follow, dictionaries, catalog }
}

const list = (value: PdfValue | undefined): PdfValue[] => value === undefined || value === null ? [] : Array.isArray(value) ? value : [value]
const unsaid = (value: PdfValue | undefined) => typeof value === 'string' ? value.replace(/^u:/, '') : ''

/** The structure tree from its root; undefined without one. */
export function structureOf(path: string, ...options: string[]): StructureElement | undefined {
  const { follow, catalog } = objectsOf(path, ...options)
  const root = follow(catalog['/StructTreeRoot']) as PdfDictionary | undefined
  function element(value: PdfValue): StructureElement {
    const own = follow(value) as PdfDictionary
    const attributes = list(own['/A']).map(one => follow(one) as PdfDictionary)
    const made: StructureElement = { type: unsaid(own['/S']).slice(1), alt: unsaid(own['/Alt']), title: unsaid(own['/T']), scope: unsaid(attributes.find(one => one['/Scope'])?.['/Scope']).slice(1), children: [], marks: [] }
    for (const child of list(follow(own['/K']))) {
      if (typeof child === 'number') made.marks.push({ page: String(own['/Pg']), id: child })
      else if (typeof child === 'object' && child && !Array.isArray(child) && child['/Type'] === '/MCR') made.marks.push({ page: String(child['/Pg']), id: Number(child['/MCID']) })
      else made.children.push(element(child))
    }
    return made
  }
  const [first] = list(follow(root?.['/K']))
  return first === undefined ? undefined : element(first)
}

/** An element and all below it, in reading order. */
export const flat = (element: StructureElement): StructureElement[] => [element, ...element.children.flatMap(flat)]

const paints = new Set(['Tj', 'TJ', '\'', '"', 'f', 'F', 'f*', 'S', 's', 'B', 'B*', 'b', 'b*', 'Do', 'sh'])
export interface PageMarks { /** painted outside of every mark */ unmarked: string[], ids: number[], artefacts: number }

/** What each page paints: everything belongs to an element or is an artefact. */
export function marksOf(bytes: Uint8Array): PageMarks[] {
  const { objects } = readPlainPdf(bytes)
  const pages = objects.filter(object => /\/Type \/Page\b(?!s)/.test(object.body))
  return pages.map((page) => {
    const content = objects.find(object => object.number === Number(/\/Contents (\d+) 0 R/.exec(page.body)![1]))!
    return marksIn(inflateSync(content.stream!).toString('latin1'))
  })
}

function marksIn(content: string): PageMarks {
  const marks: PageMarks = { unmarked: [], ids: [], artefacts: 0 }
  const words = [...tokens(content)].map(token => token.text)
  let depth = 0
  words.forEach((word, index) => {
    if (word === 'BDC' || word === 'BMC') {
      depth++
      const opening = words.slice(Math.max(0, index - 8), index)
      const id = opening.indexOf('/MCID')
      if (id >= 0 && opening.indexOf('<<') < id) marks.ids.push(Number(opening[id + 1]))
      else marks.artefacts++
    }
    else if (word === 'EMC') {
      depth--
    }
    else if (paints.has(word) && depth !== 1) {
      marks.unmarked.push(`${words.slice(Math.max(0, index - 3), index).join(' ')} ${word}`)
    }
  })
  return marks
}
