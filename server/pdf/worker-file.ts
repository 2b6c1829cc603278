import { existsSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'

export interface WorkerFile { file: string, fontsDir: string }

/** This file's folder and those above it: the built server lies a few folders deep in `.output`. */
function* foldersUpwards(from: string, most = 6): Generator<string> {
  let folder = from
  for (let step = 0; step < most; step++) {
    yield folder
    folder = dirname(folder)
  }
}

function nearest(from: string, name: string): string | undefined {
  for (const folder of foldersUpwards(from)) {
    const file = join(folder, name)
    if (existsSync(file)) return file
  }
  return undefined
}

/**
 * The bundled file of a worker thread, and the fonts of the one that draws. In the built server it lies in `workers/`,
 * wherever the build was copied to; in development and tests it is bundled on first use.
 *
 * @throws when there is neither: the build is incomplete
 */
export async function findWorkerFile(name: 'pdf' | 'long-read' = 'pdf'): Promise<WorkerFile> {
  const here = dirname(fileURLToPath(import.meta.url))
  const built = nearest(here, `workers/${name}.cjs`)
  if (built) return { file: built, fontsDir: join(dirname(built), 'fonts') }
  const script = nearest(here, 'scripts/build-workers.mjs') ?? nearest(process.cwd(), 'scripts/build-workers.mjs')
  if (!script) throw new Error(`A worker is missing: workers/${name}.cjs belongs to the build.`)
  // The address is made at run time, so that the build does not follow it: esbuild is no part of the server.
  const { buildWorkerIntoCache } = await import(/* @vite-ignore */ pathToFileURL(script).href) as { buildWorkerIntoCache: (name: string) => Promise<WorkerFile> }
  return await buildWorkerIntoCache(name)
}
