/** What the service worker answers itself. Everything else goes to the server as if it were not there. */
export type Answer = 'asset' | 'study' | 'shell' | 'leave'

export const SHELL = '/bench/offline'
const STUDY = /^\/bench\/([0-9a-f-]{36})\/?$/

/**
 * @param asset is this address one of this build's own files?
 * @example answerFor({ method: 'GET', mode: 'navigate', url: new URL('https://clinic.example/bench/5f0c…') }, …) // => 'study'
 */
export function answerFor(request: { method: string, mode: string, url: URL }, origin: string, asset: (path: string) => boolean): Answer {
  const { method, mode, url } = request
  if (method !== 'GET' || url.origin !== origin) return 'leave'
  if (asset(url.pathname)) return 'asset'
  if (mode !== 'navigate') return 'leave'
  if (url.pathname === SHELL) return 'shell'
  return STUDY.test(url.pathname) ? 'study' : 'leave'
}

/** Where a study is shown from what is kept here. */
export const shellFor = (path: string): string => `${SHELL}?study=${STUDY.exec(path)?.[1] ?? ''}`

/** A proxy answers so when the server behind it is gone. */
export const isServerGone = (status: number): boolean => status === 502 || status === 503 || status === 504

const PREFIX = 'orthodrome-shell-'
export const cacheName = (build: string): string => `${PREFIX}${build}`
/** Caches of earlier builds; caches of anybody else are left alone. */
export const isOldCache = (name: string, build: string): boolean => name.startsWith(PREFIX) && name !== cacheName(build)
