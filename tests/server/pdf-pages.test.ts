import { execFileSync } from 'node:child_process'
import { mkdtempSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import sharp from 'sharp'
import { afterAll, describe, expect, it } from 'vitest'
import { closePdfThread, renderPdf } from '#server/pdf/render-pdf'
import { reportLanguages } from '#shared/report/languages'
import { reportWords } from '#shared/report/words'
import type { ReportSource } from '#shared/report/index'
import { inReportLanguage, reportStudies } from '../fixtures/report-studies'
import { pagesOf, run } from './pdf-reading'

const folder = mkdtempSync(join(tmpdir(), 'orthodrome-pages-'))
afterAll(closePdfThread)
type Paper = 'A4' | 'LETTER'
const papers: Record<Paper, { width: number, height: number }> = { A4: { width: 595.28, height: 841.89 }, LETTER: { width: 612, height: 792 } }
const studies = ['normal', 'carpal tunnel', 'polyneuropathy', 'child without limits', 'gbs']
const cases = studies.flatMap(name => reportLanguages.flatMap(language => (['A4', 'LETTER'] as const).map(paper => ({ name, language, paper }))))

function sourceOf(name: string, language: string, paper: Paper): ReportSource {
  const source = inReportLanguage(reportStudies[name]!(), language)
  return { ...source, snapshot: { ...source.snapshot, organisation: { ...source.snapshot.organisation, paperSize: paper } } }
}
async function drawn(source: ReportSource, name: string): Promise<string> {
  const path = join(folder, `${name.replaceAll(' ', '-')}.pdf`)
  writeFileSync(path, await renderPdf(source))
  return path
}

interface Word { page: number, left: number, top: number, right: number, bottom: number, text: string }
function wordsOf(path: string): Word[] {
  return run('pdftotext', '-bbox', path, '-').split('<page ').slice(1).flatMap((xml, page) => [...xml.matchAll(/<word xMin="([\d.-]+)" yMin="([\d.-]+)" xMax="([\d.-]+)" yMax="([\d.-]+)">([^<]*)</g)]
    .map(([, left, top, right, bottom, text]) => ({ page, left: Number(left), top: Number(top), right: Number(right), bottom: Number(bottom), text: text! })))
}
/** Boxes are as high as a line; letters take the middle of it. */
function overlaps(words: Word[]): string[] {
  const found: string[] = []
  words.forEach((one, index) => {
    for (const other of words.slice(index + 1)) {
      if (other.page !== one.page) break
      const across = Math.min(one.right, other.right) - Math.max(one.left, other.left)
      const down = Math.min(one.bottom, other.bottom) - Math.max(one.top, other.top)
      const height = Math.min(one.bottom - one.top, other.bottom - other.top)
      if (across > 1.5 && down > height * 0.5) found.push(`page ${one.page + 1}: "${one.text}" and "${other.text}"`)
    }
  })
  return found
}

describe.each(cases)('$name, $language, $paper', ({ name, language, paper }) => {
  it('nothing is cut off, nothing stands on anything else, no heading or signature is alone', async () => {
    const path = await drawn(sourceOf(name, language, paper), `${name}-${language}-${paper}`)
    const { width, height } = papers[paper]
    const words = wordsOf(path)
    expect(words.length).toBeGreaterThan(100)
    expect(words.filter(word => word.left < 40 || word.right > width - 40 || word.top < 15 || word.bottom > height - 15).map(word => word.text)).toEqual([])
    expect(overlaps(words)).toEqual([])
    const printed = reportWords(language)
    const headings = [printed.motor, printed.sensory, printed.late, printed.comparisons, printed.travel, printed.findings, printed.signature, printed.derived]
    const pages = run('pdftotext', '-layout', path, '-').split('\f').filter(page => page.trim()).map(page => page.trim().split('\n').map(line => line.trim()).filter(Boolean))
    for (const [index, lines] of pages.entries()) {
      expect(headings).not.toContain(lines.at(-2))
      expect(lines.join(' ').replace(/\s+/g, ' ')).toContain(printed.page(index + 1, pages.length))
      expect(lines.length).toBeGreaterThan(8)
    }
    expect(pagesOf(path)).toBeLessThanOrEqual(name === 'gbs' || name === 'polyneuropathy' ? 5 : 2)
  })
})

/** Grey pictures of the pages, one byte a pixel. */
async function picturesOf(path: string, dpi = 50): Promise<{ data: Buffer, width: number, height: number }[]> {
  return await Promise.all(Array.from({ length: pagesOf(path) }, async (_, index) => {
    const picture = execFileSync('pdftoppm', ['-r', `${dpi}`, '-png', '-f', `${index + 1}`, '-l', `${index + 1}`, path], { maxBuffer: 1e8 })
    const { data, info } = await sharp(picture).greyscale().raw().toBuffer({ resolveWithObject: true })
    return { data, width: info.width, height: info.height }
  }))
}
const different = (one: Buffer, other: Buffer) => one.reduce((sum, byte, index) => sum + (Math.abs(byte - other[index]!) > 8 ? 1 : 0), 0)

describe('pictures of the pages', () => {
  it('the same report gives the same picture; one other number is seen', async () => {
    const [first, again] = [await drawn(sourceOf('carpal tunnel', 'en', 'A4'), 'first'), await drawn(sourceOf('carpal tunnel', 'en', 'A4'), 'again')]
    const changed = sourceOf('carpal tunnel', 'en', 'A4')
    changed.snapshot.assessment.runs[0]!.results[0]!.print = '9.9'
    const [one, same, other] = await Promise.all([picturesOf(first), picturesOf(again), picturesOf(await drawn(changed, 'changed'))])
    expect(one.map((page, index) => different(page.data, same[index]!.data))).toEqual(one.map(() => 0))
    expect(one.reduce((sum, page, index) => sum + different(page.data, other[index]!.data), 0)).toBeGreaterThan(3)
  })
  it.each(['A4', 'LETTER'] as const)('on %s no line or drawing reaches into the margin', async (paper) => {
    for (const page of await picturesOf(await drawn(sourceOf('gbs', 'de', paper), `margin-${paper}`))) {
      const margin = Math.floor(36 / 72 * 50)
      const inked = Array.from({ length: page.height }, (_, row) => row).filter(row => [...page.data.subarray(row * page.width, row * page.width + margin), ...page.data.subarray((row + 1) * page.width - margin, (row + 1) * page.width)].some(byte => byte < 250))
      expect(inked).toEqual([])
    }
  })
  it('a value outside stands out in black and white: darker than one within, and with its arrow', async () => {
    const path = await drawn(sourceOf('carpal tunnel', 'en', 'A4'), 'grey')
    const text = run('pdftotext', '-layout', path, '-')
    expect(text).toContain('↑ 5.2')
    const bold = run('pdffonts', path)
    expect(bold).toMatch(/SmBld/)
  })
})
