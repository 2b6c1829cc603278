import { roleMay, type Action } from '#shared/permissions'
import type { SessionUser } from '#shared/schemas/user'

export type SignInResult = { ok: true } | { ok: false, code: string }

/** Auth.js wants its own token with every change; it is fetched fresh each time. */
async function postAuth(path: string, fields: Record<string, string>): Promise<string> {
  const { csrfToken } = await $fetch<{ csrfToken: string }>('/api/auth/csrf')
  const answer = await $fetch<{ url: string }>(path, {
    method: 'POST',
    headers: { 'X-Auth-Return-Redirect': '1' },
    body: new URLSearchParams({ csrfToken, callbackUrl: '/', ...fields }),
  })
  return answer.url
}

/** A refused sign-in is an address with `error` and `code`, not a status. */
function readResult(url: string): SignInResult {
  const query = new URL(url, 'http://here').searchParams
  if (!query.get('error')) return { ok: true }
  return { ok: false, code: query.get('code') ?? query.get('error') ?? 'refused' }
}

/**
 * Who is signed in and what they may do. Courtesy only: the server asks again at every request.
 *
 * @example
 * const { user, may } = useSession()
 * may('referral.book', referral.siteId)
 */
export function useSession() {
  const { user } = storeToRefs(useSessionStore())
  /** useRequestFetch passes the cookie on while the server renders; it must be taken before any await. */
  const requestFetch = useRequestFetch()

  async function refresh() {
    user.value = await requestFetch<SessionUser | null>('/api/me') || null
    return user.value
  }

  /** `code`: the six digits of the second factor or a recovery code; '' when none was asked for. */
  async function signIn(email: string, password: string, code = ''): Promise<SignInResult> {
    const result = readResult(await postAuth('/api/auth/callback/credentials', { email, password, code }))
    if (result.ok) await refresh()
    return result
  }

  /** Ends the session on the server and leaves the page by a full load, so that no patient stays in memory. */
  async function signOut(because: 'asked' | 'idle' = 'asked') {
    await useNuxtApp().$offline?.forget().catch(() => undefined)
    await postAuth('/api/auth/signout', {}).catch(() => undefined)
    window.location.assign(because === 'idle' ? '/sign-in?because=idle' : '/sign-in')
  }

  /** May this person do this at that site (or at any site, when none is named)? */
  function may(action: Action, siteId?: string): boolean {
    return user.value?.holdings.some(holding => (!siteId || holding.siteId === siteId) && roleMay(holding.role, action, user.value?.inTraining)) ?? false
  }

  return { user, refresh, signIn, signOut, may }
}
