/// <reference lib="webworker" />
import { answerFor, cacheName, isOldCache, isServerGone, SHELL, shellFor } from './rules'

/**
 * Brings the bench page back when network or server are gone. It keeps the files of one build and one empty page: no
 * answer of the server's own routes and nothing of a patient. Its scope is /bench/ alone. The build puts in what differs.
 */
declare const BUILD: string
declare const ASSETS: readonly string[]
const scope = globalThis as unknown as ServiceWorkerGlobalScope
const assets = new Set(ASSETS)
const PATIENCE_MS = 8_000

/** The empty page must be of this very build, or this worker is not installed and the next try is. */
async function install() {
  const cache = await caches.open(cacheName(BUILD))
  const shell = await fetch(SHELL, { credentials: 'omit', cache: 'no-store' })
  if (!shell.ok || !(await shell.clone().text()).includes(BUILD)) throw new Error('The empty page is of another build.')
  await cache.put(SHELL, shell)
  await cache.addAll(ASSETS)
  await scope.skipWaiting()
}

async function activate() {
  const names = await caches.keys()
  await Promise.all(names.filter(name => isOldCache(name, BUILD)).map(name => caches.delete(name)))
  await scope.clients.claim()
}

/** The server's own page whenever it can be had. */
async function fromServer(request: Request): Promise<Response | null> {
  const tooLate = new Promise<null>(done => setTimeout(() => done(null), PATIENCE_MS))
  const answer = await Promise.race([fetch(request).catch(() => null), tooLate])
  return answer && !isServerGone(answer.status) ? answer : null
}
const kept = async (key: string | Request) => (await caches.open(cacheName(BUILD))).match(key)
const asset = async (request: Request) => await kept(request) ?? fetch(request)
const study = async (request: Request) => await fromServer(request) ?? Response.redirect(shellFor(new URL(request.url).pathname))
const shell = async (request: Request) => await fromServer(request) ?? await kept(SHELL) ?? Response.error()

/** The key of who is signed in, in memory for a page that is loaded anew while the server is away; never written anywhere. */
let held: { owner: string, key: CryptoKey } | null = null

scope.addEventListener('install', event => event.waitUntil(install()))
scope.addEventListener('activate', event => event.waitUntil(activate()))
scope.addEventListener('fetch', (event) => {
  const { request } = event
  const answers = { asset, study, shell }
  const kind = answerFor({ method: request.method, mode: request.mode, url: new URL(request.url) }, scope.location.origin, path => assets.has(path))
  if (kind !== 'leave') event.respondWith(answers[kind](request))
})
scope.addEventListener('message', (event) => {
  const { type, ...rest } = event.data as { type: 'hold' | 'forget' | 'ask' } & NonNullable<typeof held>
  if (type === 'hold') held = rest
  if (type === 'forget') held = null
  if (type === 'ask') event.ports[0]?.postMessage(held)
})
