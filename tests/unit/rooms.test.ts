import { readdirSync, readFileSync } from 'node:fs'
import { dirname, join, relative, resolve } from 'node:path'
import { describe, expect, it } from 'vitest'

/** Room -> rooms it may import. A room may always import itself. */
const MAY_IMPORT: Record<string, string[]> = {
  'shared': [],
  'reference-tables': ['shared'],
  'migrations': [],
  'server/database': ['shared', 'migrations'],
  'server/pdf': ['shared'],
  'server/email': ['shared'],
  'server/services': ['shared', 'reference-tables', 'server/database', 'server/pdf', 'server/email'],
  'server': ['shared', 'reference-tables', 'server/database', 'server/services'],
  'app': ['shared', 'reference-tables'],
}
/** Packages that would tie a room to one side. */
const NO_PACKAGE: Record<string, RegExp> = {
  'shared': /^(?:vue|pinia|h3|nitropack|kysely|node:|#app|#imports)/,
  'reference-tables': /^(?:vue|h3|kysely|node:)/,
  'migrations': /^(?!kysely$)/,
  'app': /^(?:kysely|better-sqlite3|node:)/,
}
const ALIASES: [string, string][] = [['~~/', ''], ['~/', 'app/'], ['@/', 'app/'], ['#shared/', 'shared/'], ['#server/', 'server/'], ['#reference-tables', 'reference-tables'], ['#migrations', 'migrations']]
const ROOMS = Object.keys(MAY_IMPORT).sort((a, b) => b.length - a.length)
const roomOf = (path: string) => ROOMS.find(room => path === room || path.startsWith(`${room}/`))

/** What is wrong with the imports of one file, in a line each. */
function wrongImports(file: string, text: string): string[] {
  const here = roomOf(file)!
  const wrong: string[] = []
  for (const [, spec = ''] of text.matchAll(/(?:from|import)\s*\(?\s*['"]([^'"]+)['"]/g)) {
    const alias = ALIASES.find(([prefix]) => spec.startsWith(prefix))
    const target = alias ? alias[1] + spec.slice(alias[0].length) : spec.startsWith('.') ? relative('.', resolve(dirname(file), spec)) : null
    const there = target === null ? null : roomOf(target)
    if (there && there !== here && !MAY_IMPORT[here]!.includes(there)) wrong.push(`${file}: ${here} may not import ${there} (${spec})`)
    if (target === null && NO_PACKAGE[here]?.test(spec)) wrong.push(`${file}: ${here} may not import the package ${spec}`)
  }
  return wrong
}

function filesIn(dir: string): string[] {
  return readdirSync(dir, { withFileTypes: true }).flatMap(entry => entry.isDirectory() ? filesIn(join(dir, entry.name)) : /\.(?:ts|vue)$/.test(entry.name) ? [join(dir, entry.name)] : [])
}

it('every import goes in a permitted direction (see DEVELOPERS.md, "Rooms")', () => {
  const files = ['shared', 'reference-tables', 'migrations', 'server', 'app'].flatMap(filesIn)
  expect(files.length).toBeGreaterThan(100)
  expect(files.flatMap(file => wrongImports(file, readFileSync(file, 'utf8')))).toEqual([])
})

describe('the check itself', () => {
  it.each([
    ['app/pages/bench/index.vue', '#server/database/connection'],
    ['app/pages/bench/index.vue', '~~/server/utils/auth'],
    ['shared/states.ts', '../server/services/context'],
    ['shared/states.ts', 'vue'],
    ['server/database/migrate.ts', '#server/services/keys'],
    ['server/services/keys.ts', '../utils/logger'],
    ['server/api/me.get.ts', '#server/pdf/render'],
    ['migrations/2026-12-01-first-tables.ts', 'zod'],
  ])('%s may not import %s', (file, spec) => expect(wrongImports(file, `import { x } from '${spec}'`)).toHaveLength(1))
})
