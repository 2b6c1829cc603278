// Bundles the page that draws uploaded PDFs, with everything it needs in one file: it may fetch nothing.
import { readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { build } from 'esbuild'

const source = name => fileURLToPath(new URL(`../app/pdf-frame/${name}`, import.meta.url))

/** Its only script is the one inside it; `sandbox` holds even where it is opened by itself. */
export const framePolicy = {
  'Content-Security-Policy': 'sandbox allow-scripts; default-src \'none\'; script-src \'unsafe-inline\' \'wasm-unsafe-eval\'; style-src \'unsafe-inline\'; img-src data: blob:; font-src data: blob:; base-uri \'none\'; form-action \'none\'; frame-ancestors \'self\'',
  'X-Content-Type-Options': 'nosniff',
  'Referrer-Policy': 'no-referrer',
  'Cache-Control': 'no-cache',
}

/** @param {{ publicDir: string }} parts */
export async function writePdfFrame({ publicDir }) {
  const { outputFiles } = await build({
    entryPoints: [source('index.ts')],
    bundle: true, minify: true, write: false, format: 'iife', target: 'es2022', logLevel: 'warning', legalComments: 'none',
    loader: { '.wasm': 'binary' },
    // For what only a server needs; a browser never gets there.
    define: { 'import.meta.url': '"about:blank"' },
  })
  const script = outputFiles[0].text.replaceAll('</script', '<\\/script').replaceAll('<!--', '<\\!--')
  writeFileSync(join(publicDir, 'pdf-frame.html'), readFileSync(source('index.html'), 'utf8').replace('/* the bundled program stands here */', () => script))
}
