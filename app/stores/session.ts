import type { SessionUser } from '#shared/schemas/user'

/** Who is signed in, known to every page; filled while the server renders and kept from page to page. */
export const useSessionStore = defineStore('session', () => {
  const user = ref<SessionUser | null>(null)
  /** True once a request was refused because the session ended. */
  const signedOut = ref(false)
  return { user, signedOut }
})
