import { execFileSync } from 'node:child_process'
import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { getDocument } from 'pdfjs-dist/legacy/build/pdf.mjs'
import { afterAll, describe, expect, it } from 'vitest'
import { encryptPdf } from '#server/pdf/encrypt-pdf'
import { drawnRanges, printable } from '#server/pdf/glyphs'
import { closePdfThread, PdfError, renderPdf } from '#server/pdf/render-pdf'
import { stampSvg } from '#server/pdf/stamp'
import { readPlainPdf, stringBytes, tokens } from '#server/pdf/pdf-syntax'
import type { ReportSource } from '#shared/report/index'
import { reportLanguages } from '#shared/report/languages'
import { reportWords } from '#shared/report/words'
import { disclaimer, smallSource } from '../fixtures/report-source'
import { reportStudies } from '../fixtures/report-studies'
import { pagesOf, run, textOf } from './pdf-reading'

const folder = mkdtempSync(join(tmpdir(), 'orthodrome-pdf-'))
afterAll(closePdfThread)

function file(name: string, bytes: Uint8Array): string {
  const path = join(folder, `${name.replaceAll(' ', '-')}.pdf`)
  writeFileSync(path, bytes)
  return path
}
const made = new Map<string, string>()
async function pathOf(name: string): Promise<string> {
  const known = made.get(name) ?? file(name, await renderPdf(reportStudies[name]!()))
  made.set(name, known)
  return known
}
const fold = (text: string) => text.normalize('NFKC')

describe.each(Object.keys(reportStudies))('the PDF of: %s', (name) => {
  it('is sound, has its title and language, embeds its fonts and is tagged', async () => {
    const path = await pathOf(name)
    expect(run('qpdf', '--check', path)).toContain('No syntax or stream encoding errors')
    const info = run('pdfinfo', path)
    expect(info).toMatch(/Title: +Report of nerve conduction studies REP-2026-000012, version 1/)
    expect(info).toMatch(/Tagged: +yes/)
    expect(info).toMatch(/JavaScript: +no/)
    const catalog = run('qpdf', '--json=2', path)
    expect(catalog).toContain('"/Lang": "u:en"')
    expect(catalog).toContain('"/DisplayDocTitle": true')
    const fonts = run('pdffonts', path).trim().split('\n').slice(2)
    expect(fonts.length).toBeGreaterThan(0)
    for (const font of fonts) expect(font).toMatch(/IBMPlexSans.*\s(yes)\s+(yes)\s+(yes)\s+\d+\s+\d+$/)
  })
  it('gives its text back with µ, °, ≤ and ±, both identifiers and the page on each page, and no box for a missing sign', async () => {
    const path = await pathOf(name)
    const text = textOf(path)
    expect(text).toContain(fold('RIGHT'))
    expect(text).toContain(disclaimer)
    expect(text).toContain('± its expanded measurement uncertainty, k = 2')
    expect(text).not.toMatch(/undefined|NaN|\[object|\uFFFD|\[U\+/)
    const pages = Number(/Pages: +(\d+)/.exec(run('pdfinfo', path))![1])
    for (let page = 1; page <= pages; page++) {
      const one = run('pdftotext', '-layout', '-f', `${page}`, '-l', `${page}`, path, '-').replace(/\s+/g, ' ')
      expect(one).toContain('SAMPLE, Patient A · 14 March 1974 · P-000001')
      expect(one).toContain(`page ${page} of ${pages}`)
    }
  })
  it('lets nothing stand outside its pages', async () => {
    const xml = run('pdftotext', '-bbox', await pathOf(name), '-')
    const words = [...xml.matchAll(/<word xMin="([\d.-]+)" yMin="([\d.-]+)" xMax="([\d.-]+)" yMax="([\d.-]+)">/g)].map(match => match.slice(1).map(Number) as [number, number, number, number])
    expect(words.length).toBeGreaterThan(50)
    for (const [left, top, right, bottom] of words) {
      expect(left).toBeGreaterThan(40)
      expect(right).toBeLessThan(595.28 - 38)
      expect(top).toBeGreaterThan(15)
      expect(bottom).toBeLessThan(841.89 - 15)
    }
  })
  it('leaves no heading alone at the foot of a page', async () => {
    const headings = ['Motor', 'Sensory', 'F-waves', 'Comparisons', 'Travel plots', 'Findings', 'Technique, temperatures, limits', 'Signature', 'History, examination']
    const pages = run('pdftotext', '-layout', await pathOf(name), '-').split('\f').filter(page => page.trim())
    for (const page of pages) {
      const lines = page.trim().split('\n').map(line => line.trim()).filter(Boolean)
      expect(headings).not.toContain(lines.at(-2))
    }
  })
})

describe('the reference study', () => {
  it('fits two pages and carries every figure', async () => {
    const path = await pathOf('carpal tunnel')
    expect(run('pdfinfo', path)).toMatch(/Pages: +2\n/)
    const text = textOf(path)
    for (const printed of ['↑ 5.2', '↑ 3.8', '↑ 4.6', '54 ± 2', '59 ± 3', '59 ± 6', '37 ± 2', '≤ 4.4 · ≥ 4.2', '≥ 51', '1.1 ± 0.1 ms', '2.3 ± 0.1 ms', '32.6 °C', fold('12 µV'), 'not computable: no left ulnar motor run', 'Rea Sample, MD', '2 December 2026, 16:40 (+01:00)', '7c1e 90ab 44d2']) expect(text).toContain(fold(printed))
  })
  it('the same version gives the same bytes', async () => {
    expect(Buffer.from(await renderPdf(reportStudies['carpal tunnel']!())).equals(readFileSync(await pathOf('carpal tunnel')))).toBe(true)
  })
  it('repeats the head of a table that goes on', async () => {
    const pages = run('pdftotext', '-layout', await pathOf('gbs'), '-').split('\f')
    expect(pages.filter(page => page.includes('stimulated at') && page.includes('velocity,')).length).toBeGreaterThan(1)
  })
})

describe('pages', () => {
  it('a usual study of seven runs takes two pages, one of twelve three', async () => {
    expect(pagesOf(await pathOf('carpal tunnel'))).toBe(2)
    expect(pagesOf(await pathOf('twelve runs'))).toBe(3)
  })
  it('parts stand closer rather than leaving a signature alone on a page', async () => {
    for (const name of Object.keys(reportStudies)) {
      const pages = run('pdftotext', '-layout', await pathOf(name), '-').split('\f').filter(page => page.trim())
      const lines = (pages.at(-1) ?? '').split('\n').filter(line => line.trim())
      expect(lines.length, name).toBeGreaterThan(8)
    }
  })
})

describe('paper, watermark, signs', () => {
  it('Letter where the organisation uses it', async () => {
    const source = smallSource()
    const letter = { ...source, snapshot: { ...source.snapshot, organisation: { ...source.snapshot.organisation, paperSize: 'LETTER' as const } } }
    expect(run('pdfinfo', file('letter', await renderPdf(letter)))).toContain('612 x 792')
  })
  it('a preliminary print and a demonstration say so across every page', async () => {
    const path = file('preliminary', await renderPdf(smallSource({ demonstration: true }, { preliminary: true, sha256: null, auditHead: null })))
    const plain = file('signed', await renderPdf(smallSource()))
    const pages = Number(/Pages: +(\d+)/.exec(run('pdfinfo', path))![1])
    for (let page = 1; page <= pages; page++) {
      expect(run('pdftotext', '-layout', '-f', `${page}`, '-l', `${page}`, path, '-')).toContain('PRELIMINARY DEMONSTRATION · REP-2026-000012 · page')
      const ink = (name: string) => {
        const [head = '', ...rest] = execFileSync('pdftoppm', ['-r', '20', '-gray', '-f', `${page}`, '-l', `${page}`, name]).toString('latin1').split('\n')
        expect(head).toBe('P5')
        return [...rest.slice(2).join('\n')].filter(sign => sign.charCodeAt(0) < 253).length
      }
      expect(ink(path)).toBeGreaterThan(ink(plain) * 1.04)
    }
    expect(textOf(await pathOf('carpal tunnel'))).not.toMatch(/PRELIMINARY|DEMONSTRATION/)
  })
  it.each(reportLanguages)('the watermark has every letter of its words: %s', (language) => {
    const words = reportWords(language)
    for (const letter of `${words.preliminary}${words.demonstration}`) expect(stampSvg(letter, { width: 100, height: 100 }), letter).toMatch(/ d="M[^"]+L/)
  })
  it('a technical report is headed as such, on paper and in its title', async () => {
    const source = smallSource()
    const path = file('technical', await renderPdf({ ...source, snapshot: { ...source.snapshot, draft: { ...source.snapshot.draft, technicalOnly: true, impression: [] } } }))
    expect(run('pdfinfo', path)).toContain('Title:           Technical report of nerve conduction studies')
    for (const page of run('pdftotext', '-layout', path, '-').split('\f').filter(one => one.trim())) expect(page).toContain('Technical report of nerve conduction studies')
    expect(textOf(path)).toContain('it holds no clinical interpretation')
  })
  it('a name in another script is written as code points, not as boxes', async () => {
    const source = smallSource({ patient: { ...smallSource().snapshot.patient, familyName: 'Żółć', givenName: '你' } })
    const text = textOf(file('script', await renderPdf(source)))
    expect(text).toContain(fold('ŻÓŁĆ, [U+4F60]'))
  })
  it.each([['▲ 5.2', '↑ 5.2'], ['5 μV', '5 µV'], ['e\u0301', 'é'], ['❄\uFE0E cold', '* cold'], ['你', '[U+4F60]'], ['Ω ≤ ≥ ±', 'Ω ≤ ≥ ±'], ['a\nb', 'a\nb']])('%j prints as %j', (typed, printed) => {
    expect(printable(typed)).toBe(printed)
  })
  it('every sign that counts as drawn has a glyph in every face', () => {
    for (const face of ['Regular', 'SemiBold', 'Italic']) {
      const has = run('fc-query', '--format', '%{charset}', `server/assets/fonts/IBMPlexSans-${face}.ttf`).trim().split(' ').map(range => range.split('-').map(end => Number.parseInt(end, 16)))
      const missing = drawnRanges.filter(([from, to]) => !has.some(([first, last = first]) => from >= first! && to <= last!))
      expect(missing).toEqual([])
    }
  })
})

describe('encryption', () => {
  const passphrase = 'lagoon quartz tulip walnut bridge otter copper mosaic'
  it('is AES-256, revision 6, and opens with the passphrase alone', async () => {
    const plain = readFileSync(await pathOf('carpal tunnel'))
    const path = file('encrypted', encryptPdf(plain, passphrase))
    const shown = run('qpdf', `--password=${passphrase}`, '--show-encryption', path)
    expect(shown).toContain('R = 6')
    for (const what of ['stream', 'string', 'file']) expect(shown).toContain(`${what} encryption method: AESv3`)
    expect(run('qpdf', `--password=${passphrase}`, '--check', path)).toContain('No syntax or stream encoding errors')
    for (const wrong of ['', 'lagoon', passphrase.toUpperCase()]) expect(() => run('qpdf', `--password=${wrong}`, '--check', path)).toThrow()
  })
  it('holds no readable word, not even in its title', async () => {
    const encrypted = Buffer.from(encryptPdf(readFileSync(await pathOf('carpal tunnel')), passphrase)).toString('latin1')
    for (const word of ['SAMPLE', 'Report of nerve', 'REP-2026', 'Nerve Laboratory', passphrase]) expect(encrypted).not.toContain(word)
  })
  it('decrypted, every object is the same as in the stored PDF', async () => {
    const plain = readFileSync(await pathOf('carpal tunnel'))
    const encrypted = file('round', encryptPdf(plain, passphrase))
    const decrypted = join(folder, 'decrypted.pdf')
    run('qpdf', `--password=${passphrase}`, '--decrypt', '--object-streams=disable', '--stream-data=preserve', encrypted, decrypted)
    const qdf = (path: string) => JSON.parse(run('qpdf', '--json=2', '--json-stream-data=inline', path)).qpdf[1] as Record<string, { stream?: { data?: string } }>
    const streams = (path: string) => Object.values(qdf(path)).flatMap(object => object.stream?.data ?? []).sort()
    expect(streams(decrypted)).toEqual(streams(file('plain', plain)))
    expect(textOf(decrypted)).toBe(textOf(await pathOf('carpal tunnel')))
  })
  it('opens in another reader', async () => {
    const bytes = encryptPdf(readFileSync(await pathOf('carpal tunnel')), passphrase)
    const open = async (password: string) => await getDocument({ data: new Uint8Array(bytes), password, useSystemFonts: false, verbosity: 0 }).promise
    const document = await open(passphrase)
    expect(document.numPages).toBe(2)
    const { items } = await (await document.getPage(1)).getTextContent()
    expect(items.map(item => 'str' in item ? item.str : '').join(' ')).toContain('SAMPLE')
    await document.destroy()
    await expect(open('wrong')).rejects.toThrow(/password/i)
  })
  it('reads strings as PDF writes them', () => {
    const [token] = [...tokens('(a\\(b\\)\\\\ \\101 \\n(nested))')]
    expect(stringBytes(token!).toString('latin1')).toBe('a(b)\\ A \n(nested)')
    expect(stringBytes([...tokens('<48 65 6C6c6F>')][0]!).toString()).toBe('Hello')
    expect([...tokens('<< /Key [1 0 R (x)] >>')].map(each => each.text)).toEqual(['<<', '/Key', '[', '1', '0', 'R', '(x)', ']', '>>'])
  })
  it('refuses what is no plain PDF', () => {
    expect(() => readPlainPdf(Buffer.from('%PDF-1.7\nnothing'))).toThrow()
  })
})

describe('the thread', () => {
  it('many at once: each gets its own', async () => {
    await renderPdf(smallSource())
    const sources = Array.from({ length: 6 }, (_, index) => smallSource({ number: `REP-2026-00010${index}` }))
    const all = await Promise.all(sources.map(renderPdf))
    expect(all.map((bytes, index) => run('pdfinfo', file(`many-${index}`, bytes)).includes(`REP-2026-00010${index}`))).toEqual(Array.from({ length: 6 }, () => true))
  })
  it('a report that cannot be drawn fails alone; the next one is made', async () => {
    const broken = { ...smallSource(), snapshot: null } as unknown as ReportSource
    await renderPdf(smallSource())
    const [bad, good] = await Promise.allSettled([renderPdf(broken), renderPdf(smallSource())])
    expect(bad).toMatchObject({ status: 'rejected', reason: { name: 'PdfError', because: 'failed' } })
    expect(good.status).toBe('fulfilled')
  })
  it('after it was ended a new one begins', async () => {
    const waiting = renderPdf(smallSource()).catch(error => error as PdfError)
    await new Promise(resolve => setTimeout(resolve, 5))
    await closePdfThread()
    const ended = await waiting
    expect(ended instanceof Uint8Array || ended instanceof PdfError).toBe(true)
    expect((await renderPdf(smallSource())).length).toBeGreaterThan(10_000)
  })
  it('leaves the event loop free while it works', async () => {
    let longest = 0
    let last = performance.now()
    const timer = setInterval(() => {
      longest = Math.max(longest, performance.now() - last)
      last = performance.now()
    }, 5)
    const start = performance.now()
    await renderPdf(reportStudies.gbs!())
    clearInterval(timer)
    expect(longest).toBeLessThan((performance.now() - start) / 2 + 50)
  })
  it('the bundle works from a copy elsewhere, with its fonts and without our packages', async () => {
    const { buildWorkersIntoOutput } = await import('../../scripts/build-workers.mjs') as { buildWorkersIntoOutput: (folder: string) => Promise<string> }
    const elsewhere = await buildWorkersIntoOutput(join(folder, 'server/workers'))
    const script = join(folder, 'run.mjs')
    writeFileSync(join(folder, 'source.json'), JSON.stringify(smallSource()))
    writeFileSync(script, `import { readFileSync } from 'node:fs'; import { Worker } from 'node:worker_threads';
      const worker = new Worker(${JSON.stringify(join(elsewhere, 'pdf.cjs'))}, { workerData: { fontsDir: ${JSON.stringify(join(elsewhere, 'fonts'))} } });
      worker.on('message', answer => { console.log(answer.bytes ? answer.bytes.length : answer.error); worker.terminate() });
      worker.postMessage({ id: 1, source: JSON.parse(readFileSync(${JSON.stringify(join(folder, 'source.json'))}, 'utf8')) });`)
    expect(Number(execFileSync('node', [script], { encoding: 'utf8', cwd: '/' }))).toBeGreaterThan(10_000)
  })
})
