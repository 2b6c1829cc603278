import { fileURLToPath } from 'node:url'
import { defineConfig } from 'vitest/config'

const root = (path: string) => fileURLToPath(new URL(`../${path}`, import.meta.url))

/**
 * For `npm run test:mutation` only: the tests of the calculations without those that try random studies, which reach
 * nearly every line and would be run again for each of the changes.
 */
export default defineConfig({
  root: root('.'),
  // The copy that is changed and tested has no generated tsconfig to read; a text here keeps it from being looked for.
  esbuild: { tsconfigRaw: '{}' },
  resolve: { alias: { '#shared': root('shared'), '#server': root('server'), '#reference-tables': root('reference-tables'), '#migrations': root('migrations') } },
  test: {
    name: 'unit',
    environment: 'node',
    include: ['tests/unit/shared/calculations/**/*.test.ts'],
    // Nothing here changes a module, so the files may share them: loading them again for each change is most of the time.
    isolate: false,
    exclude: ['**/properties.test.ts', '**/any-study.test.ts', '**/format.test.ts'],
  },
})
