import { existsSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'

function nearest(from: string, name: string): string | undefined {
  let folder = from
  for (let step = 0; step < 6; step++, folder = dirname(folder)) {
    const file = join(folder, name)
    if (existsSync(file)) return file
  }
  return undefined
}

/**
 * The bundled file of a worker thread: in `workers/` of the built server, wherever it was copied to; in development and
 * tests it is bundled on first use.
 * @throws when there is neither: the build is incomplete
 */
export async function findWorker(name: 'long-read'): Promise<string> {
  const here = dirname(fileURLToPath(import.meta.url))
  const built = nearest(here, `workers/${name}.cjs`)
  if (built) return built
  const script = nearest(here, 'scripts/build-workers.mjs') ?? nearest(process.cwd(), 'scripts/build-workers.mjs')
  if (!script) throw new Error(`The worker is missing: workers/${name}.cjs belongs to the build.`)
  // The address is made at run time, so that the build does not follow it: esbuild is no part of the server.
  const { buildWorkerIntoCache } = await import(/* @vite-ignore */ pathToFileURL(script).href) as { buildWorkerIntoCache: (name: string) => Promise<{ file: string }> }
  return (await buildWorkerIntoCache(name)).file
}
