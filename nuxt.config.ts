import { fileURLToPath } from 'node:url'
import { framePolicy, writePdfFrame } from './scripts/pdf-frame.mjs'
import { writeServiceWorker } from './scripts/service-worker.mjs'

const root = (path: string) => fileURLToPath(new URL(path, import.meta.url))

export default defineNuxtConfig({
  modules: ['@pinia/nuxt', '@nuxtjs/tailwindcss', 'nuxt-security', '@nuxt/eslint', '@nuxt/test-utils/module'],
  components: [{ path: '~/components', pathPrefix: false }],
  imports: { dirs: ['composables', 'stores'] },
  devtools: { enabled: false },
  css: [
    '@fontsource/ibm-plex-sans/latin-400.css',
    '@fontsource/ibm-plex-sans/latin-600.css',
    '@fontsource/ibm-plex-sans/latin-ext-400.css',
    '@fontsource/ibm-plex-sans/latin-ext-600.css',
    '@vuepic/vue-datepicker/dist/main.css',
  ],
  runtimeConfig: {
    dataDir: '.data/orthodrome', // NUXT_DATA_DIR
    keyFile: '', // NUXT_KEY_FILE; empty: <dataDir>.key, beside the data folder and not inside it
    appOrigin: 'http://127.0.0.1:3000', // NUXT_APP_ORIGIN
    smtpUrl: 'smtp://127.0.0.1:2525', // NUXT_SMTP_URL
    mailFrom: 'Orthodrome <reports@orthodrome.example>', // NUXT_MAIL_FROM
    bounceImapUrl: '', // NUXT_BOUNCE_IMAP_URL
    bounceAddress: '', // NUXT_BOUNCE_ADDRESS
    bounceSeconds: 60, // NUXT_BOUNCE_SECONDS
    dkimKeyFile: '', // NUXT_DKIM_KEY_FILE
    dkimSelector: '', // NUXT_DKIM_SELECTOR
    dkimDomain: '', // NUXT_DKIM_DOMAIN
    demo: '', // NUXT_DEMO: '1' for the demonstration
    idleMinutes: 20, // NUXT_IDLE_MINUTES
    trustProxy: '', // NUXT_TRUST_PROXY: '1' behind one reverse proxy of yours, which then says who calls
  },
  // Written out so that nobody has to guess: Nuxt 4 keeps the application in app/.
  srcDir: 'app/',
  // `reference-tables/` and `migrations/` stand outside the folders that Nuxt knows.
  alias: {
    '#reference-tables': root('./reference-tables'),
    '#migrations': root('./migrations'),
    '#server': root('./server'),
  },
  routeRules: { '/pdf-frame.html': { security: { headers: false }, headers: framePolicy } },
  // No manifest request: nothing is fetched that the page does not need.
  experimental: { appManifest: false },
  compatibilityDate: '2026-01-01',
  nitro: {
    typescript: { tsConfig: { include: ['../migrations/**/*', '../tests/server/**/*'] } },
    serverAssets: [{ baseName: 'fonts', dir: './assets/fonts' }],
  },
  vite: { server: { watch: { ignored: ['**/.data/**', '**/data/**'] } }, worker: { format: 'es' } },
  typescript: {
    strict: true,
    typeCheck: false,
    sharedTsConfig: { include: ['../reference-tables/**/*', '../tests/unit/**/*'] },
  },
  telemetry: false,
  hooks: {
    // After the client is built and before the server lists its files.
    'nitro:build:public-assets': async (nitro) => {
      const { publicDir } = nitro.options.output
      await writeServiceWorker({ publicDir, buildId: String(nitro.options.runtimeConfig.app.buildId) })
      await writePdfFrame({ publicDir })
    },
  },
  eslint: { config: { stylistic: { semi: false, quotes: 'single', indent: 2 } } },
  security: {
    // The routes that need a limit have their own (server/services/sign-in-limits.ts): this one counts pages too.
    rateLimiter: false,
    corsHandler: false,
    // It refuses texts such as "a < b"; every text is escaped where it is shown. Sizes are limited in server/utils/guard-request.ts.
    xssValidator: false,
    requestSizeLimiter: false,
    headers: {
      contentSecurityPolicy: {
        'default-src': ['\'self\''],
        'script-src': ['\'self\'', '\'nonce-{{nonce}}\'', '\'strict-dynamic\''],
        'style-src': ['\'self\'', '\'unsafe-inline\''],
        'img-src': ['\'self\'', 'data:', 'blob:'],
        'font-src': ['\'self\''],
        'connect-src': ['\'self\''],
        // The service worker of the bench and the worker that holds the event stream.
        'worker-src': ['\'self\''],
        // The closed frame that draws uploaded PDFs.
        'frame-src': ['\'self\''],
        'base-uri': ['\'none\''],
        'object-src': ['\'none\''],
        'form-action': ['\'self\''],
        'frame-ancestors': ['\'none\''],
        'upgrade-insecure-requests': false,
      },
      crossOriginEmbedderPolicy: false,
      // A year, as OWASP ASVS 5.0.0, 3.4.1, asks for; browsers heed it over TLS only.
      strictTransportSecurity: { maxAge: 31_536_000, includeSubdomains: true },
      referrerPolicy: 'no-referrer',
    },
  },
  tailwindcss: { cssPath: '~/assets/css/main.css', configPath: 'tailwind.config.ts', viewer: false },
})
