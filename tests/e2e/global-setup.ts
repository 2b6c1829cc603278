import { spawnSync } from 'node:child_process'
import { existsSync, mkdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { tmpdir } from 'node:os'

/**
 * One built server program and one template data folder (a small demonstration) for all browser tests;
 * each file gets a copy of the template and a server of its own (see app.ts).
 */
export default function setup({ provide }: { provide: (key: 'template', value: string) => void }) {
  if (!existsSync('.output/server/index.mjs')) throw new Error('There is no build: run "npm run build" first, or "npm test", which builds.')
  const template = join(tmpdir(), `orthodrome-template-${process.pid}`)
  mkdirSync(template, { recursive: true })
  const made = spawnSync(process.execPath, ['.output/server/scripts/seed-demo.mjs', '--studies', '24'], {
    stdio: 'inherit',
    env: { ...process.env, NUXT_DATA_DIR: join(template, 'data'), NUXT_DEMO: '1', NODE_ENV: 'production' },
  })
  if (made.status !== 0) throw new Error('The template data could not be made.')
  provide('template', template)
  return () => rmSync(template, { recursive: true, force: true })
}

declare module 'vitest' {
  interface ProvidedContext { template: string }
}
