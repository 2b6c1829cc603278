// The test runner of `npm run test:mutation`: the tests of the calculations, bundled once and loaded anew in this process
// for every change. That takes milliseconds; a fresh worker for each, as the usual runner has it, takes half a second.
import { readdirSync } from 'node:fs'
import { createRequire } from 'node:module'
import { join, relative, resolve } from 'node:path'
import { Script } from 'node:vm'
import { INSTRUMENTER_CONSTANTS } from '@stryker-mutator/api/core'
import { declareClassPlugin, PluginKind } from '@stryker-mutator/api/plugin'
import { determineHitLimitReached, DryRunStatus, TestStatus, toMutantRunResult } from '@stryker-mutator/api/test-runner'
import { startTests } from '@vitest/runner'
import { build } from 'esbuild'

const TESTS = 'tests/unit/shared/calculations'
/** These try random studies, which reach nearly every line and would be run again for each of the changes. */
const LEFT_OUT = ['properties.test.ts', 'any-study.test.ts', 'format.test.ts']
const ALIASES = { '#shared': 'shared', '#server': 'server', '#reference-tables': 'reference-tables', '#migrations': 'migrations' }

const config = {
  name: 'unit', setupFiles: [], tags: [], strictTags: false, sequence: { hooks: 'stack', setupFiles: 'list', shuffle: false, concurrent: false, seed: 1 },
  passWithNoTests: true, allowOnly: false, testTimeout: 20_000, hookTimeout: 20_000, maxConcurrency: 1, retry: 0, includeTaskLocation: false, diffOptions: {}, chaiConfig: {},
}
const changes = globalThis[INSTRUMENTER_CONSTANTS.NAMESPACE] ??= {}

class CalculationsRunner {
  capabilities() {
    // Nothing is kept between two changes, so that one cannot be seen in the next.
    return { reloadEnvironment: true }
  }

  async init() {
    config.root = process.cwd()
    this.files = readdirSync(TESTS, { recursive: true }).filter(file => file.endsWith('.test.ts') && !LEFT_OUT.some(name => file.endsWith(name))).map(file => join(TESTS, file)).sort()
    this.outside = { vitest: await import('vitest') }
    // The shipped tables are frozen and none of their code is changed after they are read: they are read once.
    const tables = await scriptOf('module.exports = require("./reference-tables/index.ts")', [])
    this.outside['#reference-tables'] = this.load(tables)
    const entry = `module.exports = { ${this.files.map(file => `${JSON.stringify(file)}: () => require(${JSON.stringify(`./${file}`)})`).join(', ')} }`
    this.script = await scriptOf(entry, [{ name: 'tables', setup: ({ onResolve }) => onResolve({ filter: /^#reference-tables$/ }, ({ path }) => ({ path, external: true })) }])
  }

  load(script) {
    const module = { exports: {} }
    const require = createRequire(resolve('package.json'))
    script.runInThisContext()(module, id => this.outside[id] ?? require(id), module.exports)
    return module.exports
  }

  async dryRun() {
    changes.activeMutant = undefined
    changes.mutantCoverage = undefined
    const tests = await this.run(this.files, undefined, test => changes.currentTestId = test && idOf(test))
    const { mutantCoverage } = changes
    return { status: DryRunStatus.Complete, tests: tests.map(resultOf), mutantCoverage }
  }

  async mutantRun({ activeMutant, sandboxFileName, testFilter, hitLimit, mutantActivation }) {
    changes.hitCount = 0
    changes.hitLimit = hitLimit
    const isStatic = mutantActivation === 'static'
    changes.activeMutant = isStatic ? activeMutant.id : undefined
    const wanted = testFilter && new Set(testFilter)
    const files = filesFor(sandboxFileName, this.files).filter(file => !wanted || testFilter.some(id => id.startsWith(`${file}#`)))
    const tests = await this.run(files, wanted, test => changes.activeMutant = test || isStatic ? activeMutant.id : undefined, true)
    changes.activeMutant = undefined
    const limit = determineHitLimitReached(changes.hitCount, hitLimit)
    return toMutantRunResult(limit ?? { status: DryRunStatus.Complete, tests: tests.map(resultOf) })
  }

  /** The tests of these files, or the wanted ones among them, until one fails where that is enough. */
  async run(files, wanted, before, stopAtFailure = false) {
    const suites = this.load(this.script)
    let failed = false
    const skips = test => (wanted && !wanted.has(idOf(test))) || (stopAtFailure && failed)
    const ran = []
    for (const file of files) {
      if (failed && stopAtFailure) break
      const [suite] = await startTests([resolve(file)], {
        config,
        importFile: () => suites[file](),
        onBeforeTryTask: before,
        onBeforeRunTask(test) {
          if (skips(test)) test.mode = 'skip'
        },
        onAfterRunTask(test) {
          before(undefined)
          if (test.result?.state === 'fail') failed = true
        },
      })
      if (suite.result?.errors?.length) throw new Error(`${file}: ${suite.result.errors[0].message}`)
      ran.push(...testsOf(suite).filter(test => test.mode === 'run'))
    }
    return ran
  }
}

/** Folders whose tests are asked about changes in the same folder alone: what they stand on has tests of its own. */
const UPPER_FLOORS = ['patterns', 'plausibility']

/** The files whose tests may notice a change in this file, those first whose path shares words with it. */
function filesFor(changed, files) {
  const words = relative('shared/calculations', relative(config.root, changed)).replace(/\.ts$/, '').split(/\W/)
  const isAsked = file => UPPER_FLOORS.every(floor => floor === words[0] || !file.startsWith(join(TESTS, floor)))
  const nearness = file => words.filter(word => file.includes(word)).length
  return files.filter(isAsked).sort((a, b) => nearness(b) - nearness(a))
}

async function scriptOf(contents, plugins) {
  const { outputFiles } = await build({
    stdin: { contents, resolveDir: process.cwd() }, bundle: true, write: false, platform: 'node', format: 'cjs', target: 'node20', packages: 'external', logLevel: 'silent',
    alias: Object.fromEntries(Object.entries(ALIASES).map(([name, folder]) => [name, resolve(folder)])), plugins, tsconfigRaw: '{}',
  })
  return new Script(`(function (module, require, exports) {${outputFiles[0].text}\n})`)
}

const testsOf = suite => suite.tasks.flatMap(task => task.type === 'suite' ? testsOf(task) : [task])

function nameOf(test) {
  const parts = [test.name]
  for (let suite = test.suite; suite; suite = suite.suite) parts.unshift(suite.name)
  return parts.join(' ').trim()
}
const idOf = test => `${relative(config.root, test.file.filepath)}#${nameOf(test)}`

function resultOf(test) {
  const common = { id: idOf(test), name: nameOf(test), fileName: test.file.filepath, timeSpentMs: test.result?.duration ?? 0 }
  if (test.result?.state === 'pass') return { ...common, status: TestStatus.Success }
  return { ...common, status: TestStatus.Failed, failureMessage: test.result?.errors?.[0]?.message ?? 'failed' }
}

export const strykerPlugins = [declareClassPlugin(PluginKind.TestRunner, 'calculations', CalculationsRunner)]
