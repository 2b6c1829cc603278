import { fileURLToPath } from 'node:url'
import { defineConfig } from 'vitest/config'

const root = (path: string) => fileURLToPath(new URL(path, import.meta.url))
const alias = {
  '#shared': root('./shared'),
  '#server': root('./server'),
  '#reference-tables': root('./reference-tables'),
  '#migrations': root('./migrations'),
  '~~': root('./'),
}

// Nuxt takes seconds to load: only when its project may run.
const named = process.argv.includes('--project')
const withNuxt = !named || process.argv.includes('nuxt')

export default defineConfig({
  test: {
    projects: [
      { resolve: { alias }, test: { name: 'unit', environment: 'node', include: ['tests/unit/**/*.test.ts'] } },
      { resolve: { alias }, test: { name: 'server', environment: 'node', include: ['tests/server/**/*.test.ts'], testTimeout: 30_000, hookTimeout: 60_000 } },
      ...withNuxt ? [await nuxtProject()] : [],
      { resolve: { alias }, test: { name: 'e2e', environment: 'node', include: ['tests/e2e/**/*.test.ts'], testTimeout: 480_000, hookTimeout: 240_000, fileParallelism: false, bail: process.env.CI ? 0 : 1, globalSetup: ['tests/e2e/global-setup.ts'] } },
    ],
  },
})

async function nuxtProject() {
  const { defineVitestProject } = await import('@nuxt/test-utils/config')
  return await defineVitestProject({ test: { name: 'nuxt', environment: 'nuxt', include: ['tests/nuxt/**/*.test.ts'], environmentOptions: { nuxt: { domEnvironment: 'happy-dom' } } } })
}
