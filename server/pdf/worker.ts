import { parentPort, workerData } from 'node:worker_threads'
import type { ReportSource } from '#shared/report/index'
import { makeReportPdf } from './make-pdf'

/**
 * Entry of the PDF thread. Making a PDF is a third of a second of pure computing; here it blocks nobody.
 * scripts/build-workers.mjs bundles this file with pdfmake, since the server's own build does not follow workers.
 */
export interface PdfJob { id: number, source: ReportSource }
export type PdfAnswer = { id: number, bytes: Uint8Array } | { id: number, error: string }

const { fontsDir } = workerData as { fontsDir: string }

async function answer({ id, source }: PdfJob): Promise<PdfAnswer> {
  try {
    return { id, bytes: await makeReportPdf(source, fontsDir) }
  }
  catch (error) {
    return { id, error: error instanceof Error ? error.name : 'unknown' }
  }
}

parentPort!.on('message', (job: PdfJob) => {
  void answer(job).then(result => parentPort!.postMessage(result, 'bytes' in result ? [result.bytes.buffer as ArrayBuffer] : []))
})
