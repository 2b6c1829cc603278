// Builds the application, its workers and its command-line programs into .output, which then runs anywhere with Node.
import { existsSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { build } from 'esbuild'
import { aliases, projectRoot, run, sourceHash } from './lib.mjs'

const before = sourceHash()
run('npx', ['nuxt', 'build'], { what: 'The build' })
if (existsSync(join(projectRoot, 'scripts/build-workers.mjs'))) run('node', ['scripts/build-workers.mjs'], { what: 'Building the workers' })

// Command-line programs that need the database: beside the server, so that they find the packages traced for it.
const entries = ['seed-demo', 'backup', 'verify', 'fill'].map(name => join(projectRoot, `scripts/${name}.ts`)).filter(file => existsSync(file))
await build({
  entryPoints: entries,
  outdir: join(projectRoot, '.output/server/scripts'),
  outExtension: { '.js': '.mjs' },
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  alias: aliases,
  external: ['better-sqlite3', 'argon2', 'sharp'],
  banner: { js: 'import { createRequire as __createRequire } from \'node:module\'; import { fileURLToPath as __fileURLToPath } from \'node:url\'; const require = __createRequire(import.meta.url); const __filename = __fileURLToPath(import.meta.url); const __dirname = __fileURLToPath(new URL(\'.\', import.meta.url));' },
  logLevel: 'warning',
})
writeFileSync(join(projectRoot, '.output/source-hash'), before)
