import { createHash } from 'node:crypto'
import { existsSync, mkdirSync, readdirSync, readFileSync, statSync } from 'node:fs'
import { dirname, join, resolve } from 'node:path'
import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'

export const projectRoot = resolve(dirname(fileURLToPath(import.meta.url)), '..')

/** The aliases of nuxt.config.ts, for what is bundled outside Nuxt. */
export const aliases = {
  '#shared': join(projectRoot, 'shared'),
  '#server': join(projectRoot, 'server'),
  '#reference-tables': join(projectRoot, 'reference-tables'),
  '#migrations': join(projectRoot, 'migrations'),
}

/** Runs a command with its output shown; ends the program with a plain sentence when it fails. */
export function run(command, args, { what, env = {} } = {}) {
  const result = spawnSync(command, args, { cwd: projectRoot, stdio: 'inherit', env: { ...process.env, ...env } })
  if (result.status !== 0) {
    console.error(`\n${what ?? command} failed (exit ${result.status ?? result.signal}).`)
    process.exit(result.status ?? 1)
  }
}

export function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number)
  if ((major === 20 && minor >= 19) || (major === 22 && minor >= 12) || major > 22) return
  console.error(`Node ${process.versions.node} is too old: install Node 20.19 or later, or 22.12 or later.`)
  process.exit(1)
}

/** Installs the packages when the folder is missing or older than the lock file says. */
export function installPackages() {
  const installed = join(projectRoot, 'node_modules/.orthodrome-lock')
  const want = hashOf([join(projectRoot, 'package-lock.json'), join(projectRoot, 'package.json')])
  if (existsSync(installed) && readFileSync(installed, 'utf8') === want) return false
  const complete = existsSync(join(projectRoot, 'node_modules/nuxt')) && existsSync(join(projectRoot, 'node_modules/.package-lock.json'))
    && statSync(join(projectRoot, 'node_modules/.package-lock.json')).mtimeMs >= statSync(join(projectRoot, 'package-lock.json')).mtimeMs
  if (complete) return false
  console.log('Installing packages; the first time this takes two to five minutes.')
  if (spawnSync('sh', ['-c', 'command -v make && command -v g++ && command -v python3'], { stdio: 'ignore' }).status !== 0)
    console.log('No compiler (make, g++, python3) was found. If the install stops at better-sqlite3 or argon2, install them first: on Debian "apt-get install build-essential python3".')
  run('npm', ['ci', '--no-audit', '--no-fund'], { what: 'Installing packages' })
  mkdirSync(dirname(installed), { recursive: true })
  return true
}

function filesIn(path) {
  if (!existsSync(path)) return []
  if (statSync(path).isFile()) return [path]
  return readdirSync(path, { withFileTypes: true }).sort((a, b) => a.name.localeCompare(b.name)).flatMap(entry => filesIn(join(path, entry.name)))
}

function hashOf(files) {
  const hash = createHash('sha256')
  for (const file of files) hash.update(file.slice(projectRoot.length)).update(readFileSync(file))
  return hash.digest('hex')
}

/** A fingerprint of everything a build depends on: a build with the same one is not made again. */
export function sourceHash() {
  return hashOf(['app', 'server', 'shared', 'reference-tables', 'migrations', 'scripts', 'public', 'nuxt.config.ts', 'tailwind.config.ts', 'package.json', 'package-lock.json'].flatMap(path => filesIn(join(projectRoot, path))))
}

export function buildIsFresh() {
  const mark = join(projectRoot, '.output/source-hash')
  return existsSync(mark) && readFileSync(mark, 'utf8') === sourceHash()
}
