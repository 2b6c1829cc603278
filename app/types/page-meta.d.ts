import type { Action } from '#shared/permissions'

declare module '#app' {
  interface PageMeta {
    /** Opens without a session: sign-in, first run, setting a password, acknowledging. */
    public?: boolean
    /** The action that opens this page; the server asks again for every request. */
    allow?: Action
  }
}

export {}
