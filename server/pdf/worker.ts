import { join } from 'node:path'
import { parentPort, workerData } from 'node:worker_threads'
import pdfmake from 'pdfmake'
import type { ReportSource } from '#shared/report/index'
import { reportDocument } from './report-document'
import { fontFamily } from './style'

/**
 * Entry of the PDF thread. Making a PDF is a third of a second of pure computing; here it blocks nobody.
 * scripts/build-workers.mjs bundles this file with pdfmake, since the server's own build does not follow workers.
 */
export interface PdfJob { id: number, source: ReportSource }
export type PdfAnswer = { id: number, bytes: Uint8Array } | { id: number, error: string }

const { fontsDir } = workerData as { fontsDir: string }
const face = (name: string) => join(fontsDir, `IBMPlexSans-${name}.ttf`)

// Real paths: text inside SVG ignores pdfmake's virtual files, and buffers are refused.
pdfmake.setFonts({ [fontFamily]: { normal: face('Regular'), bold: face('SemiBold'), italics: face('Italic'), bolditalics: face('SemiBold') } })
// A document definition can name addresses and files; none of ours does, and none shall.
pdfmake.setUrlAccessPolicy(() => false)
pdfmake.setLocalAccessPolicy((path: string) => path.startsWith(fontsDir))

async function answer({ id, source }: PdfJob): Promise<PdfAnswer> {
  try {
    const buffer = await pdfmake.createPdf(reportDocument(source)).getBuffer()
    return { id, bytes: new Uint8Array(buffer) }
  }
  catch (error) {
    return { id, error: error instanceof Error ? error.name : 'unknown' }
  }
}

parentPort!.on('message', (job: PdfJob) => {
  void answer(job).then(result => parentPort!.postMessage(result, 'bytes' in result ? [result.bytes.buffer as ArrayBuffer] : []))
})
