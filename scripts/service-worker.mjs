// Bundles the service worker into the public folder with the build's id and the list of its files.
import { readdirSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { build } from 'esbuild'

/** @param {{ publicDir: string, buildId: string }} parts */
export async function writeServiceWorker({ publicDir, buildId }) {
  const files = readdirSync(join(publicDir, '_nuxt'), { recursive: true, encoding: 'utf8' })
  const assets = files.filter(file => /\.(?:js|css|woff2)$/.test(file)).map(file => `/_nuxt/${file.replaceAll('\\', '/')}`).sort()
  await build({
    entryPoints: [fileURLToPath(new URL('../app/service-worker/index.ts', import.meta.url))],
    outfile: join(publicDir, 'sw.js'),
    bundle: true, minify: true, format: 'iife', target: 'es2022', logLevel: 'warning',
    define: { BUILD: JSON.stringify(buildId), ASSETS: JSON.stringify(assets) },
  })
}
