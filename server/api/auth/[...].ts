import { createError, defineEventHandler } from 'h3'
import { handleAuth } from '#server/utils/auth'

/** The addresses of Auth.js that are in use; its own pages and its session address are not: /api/me says who is signed in. */
const inUse = new Set(['GET /api/auth/csrf', 'POST /api/auth/callback/credentials', 'POST /api/auth/signout'])

export default defineEventHandler(async (event) => {
  if (!inUse.has(`${event.method} ${event.path.split('?')[0]}`)) throw createError({ statusCode: 404, statusMessage: 'Not Found' })
  return await handleAuth(event)
})
