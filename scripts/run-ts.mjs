// node scripts/run-ts.mjs ENTRY.ts [arguments]: bundles one TypeScript program and runs it in this process.
import { mkdirSync, rmSync } from 'node:fs'
import { basename, join, resolve } from 'node:path'
import { pathToFileURL } from 'node:url'
import { build } from 'esbuild'
import { aliases, projectRoot } from './lib.mjs'

const [entry, ...rest] = process.argv.slice(2)
const cache = join(projectRoot, 'node_modules/.cache/orthodrome')
mkdirSync(cache, { recursive: true })
const outfile = join(cache, `${basename(entry, '.ts')}-${process.pid}.mjs`)
await build({ entryPoints: [resolve(entry)], outfile, bundle: true, platform: 'node', format: 'esm', target: 'node20', alias: aliases, packages: 'external', logLevel: 'warning' })
process.on('exit', () => rmSync(outfile, { force: true }))
process.argv = [process.argv[0], resolve(entry), ...rest]
await import(pathToFileURL(outfile).href)
