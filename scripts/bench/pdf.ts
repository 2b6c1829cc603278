import { resolve } from 'node:path'
import pdfmake from 'pdfmake'
import type { TDocumentDefinitions } from 'pdfmake/interfaces'
import { openReadOnly } from '#server/database/connection'
import { makeReportPdf } from '#server/pdf/make-pdf'
import { fontFamily, size } from '#server/pdf/style'
import { reportSource } from '#server/services/make-report-pdf'
import { reportBlocks, type ReportSource } from '#shared/report/index'
import type { Clinic } from './clinic'
import { getOnce, load, type Target } from './load'
import { against, median, ms, usedMs, type Figure } from './measure'

const PDFS = 20
const FOR_MS = 1_500

/** Real reports of the demonstration, the longest first; none of them has its PDF yet. */
async function reportsOf({ dataDir }: Clinic): Promise<{ ids: string[], longest: ReportSource }> {
  const db = openReadOnly(`${dataDir}/orthodrome.sqlite`)
  try {
    const rows = await db.selectFrom('reportVersion').leftJoin('reportPdf', 'reportPdf.reportVersionId', 'reportVersion.id').selectAll('reportVersion')
      .where('reportPdf.sha256', 'is', null).orderBy(eb => eb.fn('length', ['snapshotJson']), 'desc').limit(500).execute()
    if (!rows[0]) throw new Error('The demonstration has no report.')
    return { ids: rows.map(row => row.reportId), longest: await reportSource(db, rows[0]) }
  }
  finally {
    await db.destroy()
  }
}

const tablesOf = (source: ReportSource) => reportBlocks(source).flatMap(part => part.blocks).filter(block => block.kind === 'table')

/** Plain tables of the same rows and columns, with a short number in each cell: what pdfmake alone takes. */
function bareDocument(source: ReportSource): TDocumentDefinitions {
  const tables = tablesOf(source).map(({ columns, rows }) => ({ table: { body: [columns, ...rows.map(row => row.cells)].map(line => line.map(() => ({ text: '12.3' }))) } }))
  return { pageSize: 'A4', compress: true, defaultStyle: { font: fontFamily, fontSize: size.body }, content: tables }
}

async function drawing(make: () => Promise<{ length: number }>): Promise<() => Promise<number>> {
  const measure = async () => {
    const from = usedMs()
    let drawn = 0
    for (; usedMs() - from < FOR_MS; drawn++) if ((await make()).length < 1000) throw new Error('No PDF came of it.')
    return (usedMs() - from) / drawn
  }
  await measure()
  return measure
}

export async function drawingFigure(clinic: Clinic, rounds: number): Promise<Figure> {
  const { longest } = await reportsOf(clinic)
  const fontsDir = resolve('server/assets/fonts')
  const face = (name: string) => `${fontsDir}/IBMPlexSans-${name}.ttf`
  pdfmake.setFonts({ [fontFamily]: { normal: face('Regular'), bold: face('SemiBold'), italics: face('Italic'), bolditalics: face('SemiBold') } })
  pdfmake.setUrlAccessPolicy(() => false)
  pdfmake.setLocalAccessPolicy((path: string) => path.startsWith(fontsDir))
  const cells = tablesOf(longest).reduce((sum, { columns, rows }) => sum + columns.length * (rows.length + 1), 0)
  const { one, other, ratio } = await against(rounds, await drawing(() => makeReportPdf(longest, fontsDir)), await drawing(() => pdfmake.createPdf(bareDocument(longest)).getBuffer()))
  return { what: `PDF of a report of ${longest.snapshot.study.runs.length} runs, against bare pdfmake with as many cells (${cells})`, value: ms(one), partner: ms(other), ratio }
}

/** Ten people who look at pages, each asking a little after the last answer. */
const people = (clinic: Clinic): Target[] => [{ origin: clinic.origin, path: '/api/me', cookie: clinic.cookies.administrator }, { origin: clinic.origin, path: '/api/referrals?pageSize=50', cookie: clinic.cookies.administrator }]
const PAUSE_MS = 25

export async function besidePdfsFigure(clinic: Clinic, rounds: number): Promise<Figure> {
  const { ids } = await reportsOf(clinic)
  const results: { idle: number, busy: number, tookMs: number }[] = []
  // Two rounds: the first one also starts the PDF thread.
  for (let round = 0; round < Math.min(rounds, Math.floor(ids.length / PDFS)); round++) {
    let waiting = PDFS
    const from = performance.now()
    const asked = ids.slice(round * PDFS, (round + 1) * PDFS).map(async id => getOnce({ origin: clinic.origin, path: `/api/reports/${id}/pdf`, cookie: clinic.cookies.neurologist }).finally(() => waiting--))
    const [busy] = await Promise.all([load(people(clinic), { pauseMs: PAUSE_MS, until: () => waiting === 0 }), ...asked])
    const tookMs = performance.now() - from
    const idle = await load(people(clinic), { pauseMs: PAUSE_MS, until: elapsed => elapsed >= Math.min(tookMs, 10_000) })
    results.push({ idle: idle.p99Ms, busy: busy.p99Ms, tookMs })
  }
  return {
    what: `99th percentile of other requests while ${PDFS} PDFs are made (${(median(results.map(one => one.tookMs)) / 1000).toFixed(1)} s), against none`,
    value: ms(median(results.map(one => one.busy))), partner: ms(median(results.map(one => one.idle))), ratio: median(results.map(one => one.busy / one.idle)),
  }
}
