import { build } from 'esbuild'
import { gzipSync } from 'node:zlib'
import { resolve } from 'node:path'
import { referenceTables } from '#reference-tables/index'
import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy, type Policy } from '#shared/calculations/types'
import type { ReferenceTable } from '#shared/schemas/reference-table'
import { against, ms, timeOf, type Figure } from './measure'
import { studyOfRuns } from './study-of-runs'

/** What the demonstration's sites have in use. */
const adopted = ['aanem-ndtf-2016']
const VARIANTS = 5
const TIME_MS = 400
/** Until the engine has compiled what runs often. */
const WARM_MS = 2_500

function judgedBy(tables: readonly ReferenceTable[]): { tables: readonly ReferenceTable[], policy: Policy } {
  return { tables, policy: { ...defaultPolicy, adopted: tables.map(({ id, version }) => ({ setId: id, version, adoptedOn: '2026-01-01', adoptedBy: 'the bench', verifiedRows: [] })) } }
}

/**
 * Each turn judges a study with other values than the turn before, as typing does. From turn to turn the library keeps the
 * answers of the sets for one person and the indices of the sets, as it does in the program; nothing of a study is kept
 * (nothing-kept.test.ts), so no turn is answered from another one.
 */
function assessing(runs: number, { tables, policy }: ReturnType<typeof judgedBy>): () => number {
  const studies = Array.from({ length: VARIANTS }, (_, turn) => studyOfRuns(runs, turn))
  const act = (turn: number) => assessStudy(studies[turn % VARIANTS]!, tables, policy)
  timeOf(act, WARM_MS)
  return () => timeOf(act, TIME_MS)
}

/** A copy of what goes in, the study. */
function cloning(runs: number): () => number {
  const study = studyOfRuns(runs)
  const act = () => structuredClone(study)
  timeOf(act, WARM_MS)
  return () => timeOf(act, TIME_MS)
}

async function bundleSize(entry: string): Promise<{ whole: number, packed: number }> {
  const { outputFiles: [file] } = await build({ entryPoints: [resolve(entry)], bundle: true, write: false, minify: true, platform: 'browser', format: 'esm', target: 'es2022', logLevel: 'error' })
  return { whole: file!.contents.length, packed: gzipSync(file!.contents, { level: 9 }).length }
}
const kb = (bytes: number) => `${(bytes / 1000).toFixed(1)} kB`

export async function libraryFigures(rounds: number): Promise<Figure[]> {
  const usual = judgedBy(referenceTables.filter(table => adopted.includes(table.id)))
  const every = judgedBy(referenceTables)
  // Everything runs warm before anything is measured: the engine compiles the same code for all of it.
  const acts = { usual: assessing(30, usual), every: assessing(30, every), copy: cloning(30), forty: assessing(40, usual), ten: assessing(10, usual) }
  const thirty = await against(rounds, acts.usual, acts.copy)
  const thirtyOfAll = await against(rounds, acts.every, acts.copy)
  const forty = await against(rounds, acts.forty, acts.ten)
  const size = await bundleSize('shared/calculations/assess-study.ts')
  return [
    { what: 'Assessing a study of 30 runs, against structuredClone of it', value: ms(thirty.one), partner: ms(thirty.other), ratio: thirty.ratio, goal: 10 },
    { what: `The same with all ${every.tables.length} sets in use`, value: ms(thirtyOfAll.one), partner: ms(thirtyOfAll.other), ratio: thirtyOfAll.ratio },
    { what: 'Assessing 40 runs, against 10', value: ms(forty.one), partner: ms(forty.other), ratio: forty.ratio, goal: 4.4 },
    { what: 'Library as a browser loads it, gzip, against not packed', value: kb(size.packed), partner: kb(size.whole), ratio: size.packed / size.whole },
  ]
}
