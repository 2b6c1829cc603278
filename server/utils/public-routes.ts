/**
 * The routes that answer without a session. Everything else under /api answers 401 before its handler runs.
 * Each of them declares `allow: 'public'`; tests/server/every-route.test.ts compares the two.
 */
const publicRoutes: readonly { methods: readonly string[], path: RegExp }[] = [
  { methods: ['GET', 'POST'], path: /^\/api\/auth\/(?:csrf|signout|callback\/credentials)$/ },
  { methods: ['GET'], path: /^\/api\/me$/ },
  { methods: ['GET'], path: /^\/api\/health$/ },
  { methods: ['GET', 'POST'], path: /^\/api\/first-run$/ },
  { methods: ['POST'], path: /^\/api\/set-password$/ },
  { methods: ['POST'], path: /^\/api\/forgotten-password$/ },
  { methods: ['GET', 'POST'], path: /^\/api\/acknowledge\/[^/]+$/ },
  { methods: ['POST'], path: /^\/api\/acknowledge\/[^/]+\/(?:collectors|collect|reply|ask-link)$/ },
  { methods: ['GET'], path: /^\/api\/letters\/[^/]+$/ },
  { methods: ['POST'], path: /^\/api\/letters\/[^/]+\/(?:open|answer|uploads)$/ },
]

/** @param path without the query */
export function isPublicRoute(method: string, path: string): boolean {
  const asked = method === 'HEAD' ? 'GET' : method
  return publicRoutes.some(route => route.methods.includes(asked) && route.path.test(path))
}
