// Bundles the worker threads, which Nitro's build does not follow, with the packages they need.
// As a script: into .output/server/workers, with the fonts beside them, so that a copy of .output runs anywhere.
// As a module (development and tests): into the cache of node_modules, once per state of the source.
import { createHash } from 'node:crypto'
import { copyFileSync, existsSync, mkdirSync, readdirSync, renameSync, writeFileSync } from 'node:fs'
import { dirname, join, resolve } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { build } from 'esbuild'

const root = fileURLToPath(new URL('..', import.meta.url))
const fontsDir = join(root, 'server/assets/fonts')
// CommonJS, so that pdfkit finds its `__dirname`. The names say what the thread does and not the library.
const sources = {
  'pdf': join(root, 'server/pdf/worker.ts'),
  'long-read': join(root, 'server/services/long-reads/worker.ts'),
}

async function bundle(name) {
  const result = await build({
    entryPoints: [sources[name]],
    bundle: true,
    write: false,
    platform: 'node',
    format: 'cjs',
    target: 'node20',
    alias: { '#shared': join(root, 'shared'), '#server': join(root, 'server'), '#reference-tables': join(root, 'reference-tables'), '#migrations': join(root, 'migrations') },
    external: ['better-sqlite3'],
    legalComments: 'none',
    logLevel: 'warning',
  })
  return result.outputFiles[0].contents
}

function writeWhole(file, contents) {
  mkdirSync(dirname(file), { recursive: true })
  const part = `${file}.${process.pid}.part`
  writeFileSync(part, contents)
  renameSync(part, file)
}

/** For development and tests: the bundled worker and, for the PDF thread, the folder of its fonts. */
export async function buildWorkerIntoCache(name = 'pdf') {
  const contents = await bundle(name)
  const hash = createHash('sha256').update(contents).digest('hex').slice(0, 16)
  const file = join(root, `node_modules/.cache/orthodrome/${name}-${hash}.cjs`)
  if (!existsSync(file)) writeWhole(file, contents)
  return { file, fontsDir }
}

/** For the built server. */
export async function buildWorkersIntoOutput(outDir = join(root, '.output/server/workers')) {
  for (const name of Object.keys(sources)) writeWhole(join(outDir, `${name}.cjs`), await bundle(name))
  mkdirSync(join(outDir, 'fonts'), { recursive: true })
  for (const name of readdirSync(fontsDir)) copyFileSync(join(fontsDir, name), join(outDir, 'fonts', name))
  return outDir
}

if (process.argv[1] && import.meta.url === pathToFileURL(resolve(process.argv[1])).href) await buildWorkersIntoOutput()
