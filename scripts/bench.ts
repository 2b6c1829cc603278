// npm run bench [-- --small] [-- --rounds N]: a table of ratios, each measured against its partner in the same run, since
// milliseconds alone say more about the machine than about the program. Everything stays on this machine. Goals are
// said, never enforced. --small compares lists of 10,000 studies in place of 100,000.
import { mkdtempSync, rmSync } from 'node:fs'
import { cpus, tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import { pathToFileURL } from 'node:url'
import { parseArgs } from 'node:util'
import { makeTemplate, startClinic, type Clinic } from './bench/clinic'
import { libraryFigures } from './bench/library'
import { mailFigure } from './bench/mail'
import { printFigures } from './bench/measure'
import { besidePdfsFigure, drawingFigure } from './bench/pdf'
import { listFigures, requestFigures } from './bench/requests'
import { typingFigures } from './bench/typing'

const { values } = parseArgs({ options: { small: { type: 'boolean', default: false }, rounds: { type: 'string', default: '5' } } })
const rounds = Math.min(25, Math.max(1, Math.round(Number(values.rounds)) || 5))
const counts = { small: 1_000, large: values.small ? 10_000 : 100_000 }
/** Gives enough real reports for the rounds of twenty PDFs. */
const DEMO_STUDIES = 90

/** scripts/lib.mjs finds the project by its own place, so it is not bundled. */
async function buildIsFresh(): Promise<boolean> {
  const lib = await import(pathToFileURL(resolve('scripts/lib.mjs')).href) as { buildIsFresh: () => boolean }
  return lib.buildIsFresh()
}

async function measureServer(folder: string): Promise<void> {
  const running: Clinic[] = []
  const start = async (name: string, template: string, studies: number) => {
    const from = Date.now()
    const clinic = await startClinic(folder, template, name, studies)
    running.push(clinic)
    console.log(`${studies.toLocaleString('en')} studies filled and the server started in ${Math.round((Date.now() - from) / 1000)} s.`)
    return clinic
  }
  try {
    console.log('\nMaking data to measure with; the large database takes some minutes and about two gigabytes for the time.')
    const template = makeTemplate(folder, DEMO_STUDIES)
    const small = await start('small', template, counts.small)
    printFigures('Requests, ten connections', await requestFigures(small, rounds))
    printFigures('Bench, in a browser', await typingFigures(small))
    printFigures('Reports', [await drawingFigure(small, rounds), await besidePdfsFigure(small, Math.min(rounds, 3))])
    const large = await start('large', template, counts.large)
    printFigures('Lists, ten connections', await listFigures(large, small, counts, rounds))
  }
  finally {
    for (const clinic of running) await clinic.stop()
  }
}

console.log(`Node ${process.versions.node}, ${cpus().length} processors (${cpus()[0]?.model.trim() ?? 'unknown'}), median of ${rounds} rounds. Server and asker share the machine.`)
const folder = mkdtempSync(join(tmpdir(), 'orthodrome-bench-'))
process.on('exit', () => rmSync(folder, { recursive: true, force: true }))
for (const signal of ['SIGINT', 'SIGTERM'] as const) process.on(signal, () => process.exit(1))
printFigures('Calculation library, processor time', await libraryFigures(rounds))
printFigures('Mail', [await mailFigure(folder, rounds)])
if (!await buildIsFresh()) {
  console.error('\nThe rest needs a build of these sources. Run npm run build, then npm run bench again.')
  process.exitCode = 1
}
else await measureServer(folder)
