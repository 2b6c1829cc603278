// npm test: installs what is missing, then lint, types, unit, server, component and browser tests. Ends with "N passed, N failed".
import { spawnSync } from 'node:child_process'
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { buildIsFresh, checkNode, installPackages, projectRoot } from './lib.mjs'

checkNode()
installPackages()
installTools()

const results = mkdtempSync(join(tmpdir(), 'orthodrome-test-'))
let passed = 0
let failed = 0
const started = Date.now()

step('types made by Nuxt', 'npx', ['nuxt', 'prepare'])
step('lint', 'npx', ['eslint', '.'])
step('types', 'npx', ['vue-tsc', '-b', '--noEmit'])
vitest('unit')
vitest('server')
vitest('nuxt')
if (buildIsFresh() || step('build', 'node', ['scripts/build.mjs'])) vitest('e2e')

rmSync(results, { recursive: true, force: true })
console.log(`\n${passed} passed, ${failed} failed`)
process.exit(failed ? 1 : 0)

/** One check of its own: counts as one. */
function step(name, command, args) {
  const from = Date.now()
  console.log(`\n== ${name}`)
  const ok = spawnSync(command, args, { cwd: projectRoot, stdio: 'inherit', env: { ...process.env, CI: '1' } }).status === 0
  console.log(`== ${name}: ${ok ? 'passed' : 'FAILED'} in ${seconds(from)} s`)
  if (ok) passed++
  else failed++
  return ok
}

function vitest(project) {
  const from = Date.now()
  const file = join(results, `${project}.json`)
  console.log(`\n== ${project} tests`)
  const status = spawnSync('npx', ['vitest', 'run', '--project', project, '--reporter=dot', '--reporter=json', `--outputFile.json=${file}`], { cwd: projectRoot, stdio: 'inherit', env: { ...process.env, CI: '1' } }).status
  const counts = existsSync(file) ? JSON.parse(readFileSync(file, 'utf8')) : { numPassedTests: 0, numFailedTests: 0 }
  passed += counts.numPassedTests
  failed += counts.numFailedTests
  // A suite that could not even be loaded has no failed test of its own.
  if (status !== 0 && !counts.numFailedTests) failed++
  console.log(`== ${project}: ${counts.numPassedTests} passed, ${counts.numFailedTests} failed in ${seconds(from)} s (${seconds(started)} s in all)`)
}

function seconds(from) {
  return Math.round((Date.now() - from) / 1000)
}

/** Debian's chromium for the browser, poppler and qpdf for the PDF checks: without them nothing is tested. */
function installTools() {
  const missing = [['chromium', 'chromium'], ['pdftotext', 'poppler-utils'], ['qpdf', 'qpdf']].filter(([program]) => !isThere(program)).map(([, name]) => name)
  if (missing.length && !install(missing)) {
    console.error(`Could not install ${missing.join(', ')}. Install them by hand (Debian: apt-get install ${missing.join(' ')}) and run npm test again.`)
    console.log('\n0 passed, 1 failed')
    process.exit(1)
  }
  // A real mail server; the test starts one of its own on the loopback, and says so when there is none. Without this answer
  // the package would set itself up to serve the machine.
  if (!isThere('postfix') && !install(['postfix'], 'postfix postfix/main_mailer_type select No configuration')) console.error('Could not install postfix: the test against a real mail server is left out.')
}

function isThere(program) {
  return spawnSync('sh', ['-c', `PATH=$PATH:/usr/sbin command -v ${program}`]).status === 0
}

function install(names, answer = '') {
  console.log(`Installing ${names.join(', ')} for the tests.`)
  const sudo = process.getuid?.() === 0 ? '' : 'sudo '
  const answered = answer ? `echo '${answer}' | ${sudo}debconf-set-selections && ` : ''
  return spawnSync('sh', ['-c', `${sudo}apt-get update -q && ${answered}${sudo}env DEBIAN_FRONTEND=noninteractive apt-get install -y -q --no-install-recommends ${names.join(' ')}`], { stdio: ['ignore', 'ignore', 'inherit'] }).status === 0
}
